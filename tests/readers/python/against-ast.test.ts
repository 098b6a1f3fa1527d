// Python's own parser judges over Python's own library: what `ast` holds of dozens of modules, the reader has to see.
import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { expect, it } from 'vitest';
import { readPython } from '../../../src/readers/python/read-python.ts';
import { describeWith, PYTHON } from '../../support/tools.ts';

const JUDGE = `
import ast, glob, json, os
folder = os.path.dirname(os.__file__)
told = {}
for path in sorted(glob.glob(folder + '/*.py') + glob.glob(folder + '/email/*.py') + glob.glob(folder + '/unittest/*.py'))[::3]:
    functions, calls, classes = [], [], []
    for n in ast.walk(ast.parse(open(path, 'rb').read())):
        if isinstance(n, (ast.FunctionDef, ast.AsyncFunctionDef)):
            a = n.args
            plain = a.posonlyargs + a.args
            given = [None] * (len(plain) - len(a.defaults)) + a.defaults
            args = [[x.arg, d is not None] for x, d in zip(plain, given)]
            if a.vararg: args.append([a.vararg.arg, True])
            args += [[x.arg, d is not None] for x, d in zip(a.kwonlyargs, a.kw_defaults)]
            if a.kwarg: args.append([a.kwarg.arg, True])
            functions.append([n.name, n.lineno, args])
        elif isinstance(n, ast.ClassDef): classes.append([n.name, n.lineno])
        elif isinstance(n, ast.Call):
            f = n.func
            name = f.id if isinstance(f, ast.Name) else f.attr if isinstance(f, ast.Attribute) else None
            if name: calls.append([name, f.end_lineno, len(n.args) + len(n.keywords)])
    told[path] = dict(functions=functions, calls=calls, classes=classes)
print(json.dumps(told))
`;

type Told = Record<
  string,
  { functions: [string, number, [string, boolean][]][]; calls: [string, number, number][]; classes: [string, number][] }
>;

/** How many of each stand in one list and not in the other. */
function difference(mine: readonly unknown[], theirs: readonly unknown[]) {
  const count = new Map<string, number>();
  for (const one of theirs) count.set(JSON.stringify(one), (count.get(JSON.stringify(one)) ?? 0) + 1);
  const invented: string[] = [];
  for (const one of mine.map((each) => JSON.stringify(each))) {
    const left = count.get(one) ?? 0;
    if (left === 0) invented.push(one);
    else count.set(one, left - 1);
  }
  return { missed: [...count].flatMap(([one, left]) => Array<string>(left).fill(one)), invented };
}

describeWith(['python3'], "Python's own library, judged by its ast module", () => {
  it('gives every function with its arguments, every class and nearly every call', () => {
    const { stdout, status } = spawnSync(PYTHON, ['-c', JUDGE], { encoding: 'utf8', maxBuffer: 1 << 28 });
    expect(status).toBe(0);
    const told = Object.entries(JSON.parse(stdout) as Told);
    const wrong: string[] = [];
    let [calls, missed, invented] = [0, 0, 0];
    for (const [path, theirs] of told) {
      const read = readPython(path, new Uint8Array(readFileSync(path)));
      const functions = read.procedures.map((one) => [
        one.name,
        one.line,
        one.args.map((arg) => [arg.name.replace(/^\*+/, ''), arg.optional]),
      ]);
      const apart = difference(functions, theirs.functions);
      const classes = difference(
        read.types.filter((one) => one.kind === 'class').map((one) => [one.name, one.line]),
        theirs.classes,
      );
      wrong.push(
        ...[...apart.missed, ...apart.invented, ...classes.missed, ...classes.invented].map((one) => `${path} ${one}`),
      );
      const mine = read.calls.map((one) => [one.callee.split('.').at(-1)!, one.line, one.args.length]);
      const between = difference(mine, theirs.calls);
      calls += theirs.calls.length;
      missed += between.missed.length;
      invented += between.invented.length;
    }
    expect(told.length).toBeGreaterThan(40);
    expect(wrong).toEqual([]);
    expect(1 - missed / calls).toBeGreaterThanOrEqual(0.99);
    expect((calls - missed) / (calls - missed + invented)).toBeGreaterThanOrEqual(0.99);
  }, 60_000);
});

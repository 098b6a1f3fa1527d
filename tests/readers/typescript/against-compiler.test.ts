// The compiler's own parser judges over the sources of Mortise itself: every function, method and call that it has, the reader has to see.
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { ts } from 'ts-morph';
import { expect, it } from 'vitest';
import { readTypescript } from '../../../src/readers/typescript/read-typescript.ts';

const root = join(import.meta.dirname, '../../../src');

interface Told {
  readonly functions: string[];
  readonly calls: string[];
}

/** Named functions and methods with their parameters, and calls with the number of their arguments, each with its line. */
function told(path: string, text: string): Told {
  const file = ts.createSourceFile(path, text, ts.ScriptTarget.Latest, true);
  const functions: string[] = [];
  const calls: string[] = [];
  const lineOf = (place: number) => file.getLineAndCharacterOfPosition(place).line + 1;
  const look = (node: ts.Node, nested: boolean): void => {
    if (
      (ts.isFunctionDeclaration(node) || ts.isMethodDeclaration(node)) &&
      node.name !== undefined &&
      node.body !== undefined
    ) {
      // The members of an object are values, not declarations.
      if (!nested && !ts.isObjectLiteralExpression(node.parent))
        functions.push(
          `${lineOf(node.name.getStart())} ${node.name.getText()}(${node.parameters
            .filter((one) => ts.isIdentifier(one.name))
            .map(
              (one) =>
                `${one.name.getText()}${one.questionToken !== undefined || one.initializer !== undefined || one.dotDotDotToken !== undefined ? '?' : ''}`,
            )
            .join(', ')})`,
        );
    }
    if (ts.isCallExpression(node)) {
      const callee = ts.isPropertyAccessExpression(node.expression) ? node.expression.name : node.expression;
      if (ts.isIdentifier(callee)) calls.push(`${callee.text}/${node.arguments.length}`);
    }
    // A function inside another is a matter of that one.
    const within = nested || ts.isFunctionLike(node);
    ts.forEachChild(node, (child) => look(child, within));
  };
  look(file, false);
  return { functions, calls };
}

it('sees the functions, methods, arguments and calls that the compiler has', () => {
  const files = readdirSync(root, { recursive: true })
    .map(String)
    .filter((name) => name.endsWith('.ts') && !name.endsWith('.as.ts'))
    .sort()
    .filter((_, index) => index % 6 === 0);
  expect(files.length).toBeGreaterThan(50);
  const missed: string[] = [];
  const invented: string[] = [];
  let [functions, calls, seenCalls] = [0, 0, 0];
  for (const name of files) {
    const text = readFileSync(join(root, name), 'utf8');
    const judge = told(name, text);
    const read = readTypescript(name, text);
    const lines = text.split('\n');
    const mine = new Set(
      read.procedures.map(
        (one) =>
          `${one.name}(${one.args
            .filter((arg) => /^[\w$]+$/.test(arg.name))
            .map((arg) => `${arg.name}${arg.optional ? '?' : ''}`)
            .join(', ')})`,
      ),
    );
    functions += judge.functions.length;
    for (const one of judge.functions) if (!mine.has(one.replace(/^\d+ /, ''))) missed.push(`${name} ${one}`);
    for (const one of read.procedures)
      if (!(lines[one.line - 1] ?? '').includes(one.name)) invented.push(`${name} ${one.line} ${one.name}`);
    const left = new Map<string, number>();
    for (const one of read.calls) {
      const key = `${one.callee.split('.').at(-1)}/${one.args.length}`;
      left.set(key, (left.get(key) ?? 0) + 1);
    }
    for (const one of judge.calls) {
      calls++;
      const count = left.get(one) ?? 0;
      if (count > 0) seenCalls++;
      left.set(one, count - 1);
    }
  }
  expect(functions).toBeGreaterThan(150);
  expect(invented).toEqual([]);
  expect({ missed: missed.slice(0, 10), share: missed.length / functions <= 0.002 }).toEqual({
    missed: missed.slice(0, 10),
    share: true,
  });
  expect(seenCalls / calls).toBeGreaterThanOrEqual(0.99);
}, 120_000);

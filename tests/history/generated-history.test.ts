import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { drift } from '../../src/history/drift.ts';
import { openRepository } from '../../src/sources/open-tree.edge.ts';
import { importHistory, type MadeCommit } from './fast-import.ts';

interface Routine {
  readonly name: string;
  readonly args: readonly string[];
  readonly constant: number;
}
type Tree = Readonly<Record<string, readonly Routine[]>>;

/** One thing that a commit does to one file; `pick` chooses where. */
const operation = fc.record({
  what: fc.constantFrom(
    'add argument',
    'drop argument',
    'swap arguments',
    'add routine',
    'drop routine',
    'body',
    'comment',
    'layout',
    'rename file',
    'move routine',
    'reorder',
    'side branch',
  ),
  pick: fc.nat(1_000),
});
type Operation = typeof operation extends fc.Arbitrary<infer T> ? T : never;

describe('drift over generated histories', () => {
  it('tells every change at its commit and nothing else, through edits, moves, splits and merges', async () => {
    await fc.assert(
      fc.asyncProperty(fc.array(operation, { minLength: 1, maxLength: 14 }), async (operations) => {
        const { commits, truth } = play(operations);
        const repository = openRepository(importHistory(commits));
        try {
          const report = await drift(repository, await repository.range('main'), { cache: false, workers: 0 });
          const told = new Map<string, string[]>();
          for (const step of report.steps) {
            const changes = step.changes
              .filter(({ kind }) => kind !== 'implementation')
              .map(({ kind, subject }) => `${kind} ${subject}`);
            told.set(step.commit.subject, [...(told.get(step.commit.subject) ?? []), ...changes]);
          }
          for (const { subject } of commits) {
            expect((told.get(subject) ?? []).sort(), subject).toEqual((truth.get(subject) ?? []).sort());
          }
        } finally {
          repository.close();
        }
      }),
      { numRuns: process.env.CI === 'true' ? 60 : 15 },
    );
  }, 240_000);
});

function play(operations: readonly Operation[]): { commits: MadeCommit[]; truth: Map<string, string[]> } {
  const truth = new Map<string, string[]>();
  let serial = 0;
  const routine = (args: number): Routine => {
    serial += 1;
    return {
      name: `routine_${serial}`,
      args: Array.from({ length: args }, (_, at) => `x${serial}_${at}`),
      constant: serial,
    };
  };
  let tree: Tree = {
    'a.c': [routine(2), routine(3), routine(1)],
    'b.c': [routine(2), routine(2), routine(4)],
    'side.c': [routine(2)],
  };
  const commits: MadeCommit[] = [{ subject: 'begin', files: render(tree, 0, '') }];
  for (const { what, pick } of operations) {
    const subject = `${commits.length} ${what}`;
    const made: string[] = [];
    const files = Object.keys(tree)
      .filter((file) => file !== 'side.c')
      .sort();
    const file = files[pick % files.length]!;
    const list = tree[file]!;
    const at = pick % list.length;
    const one = list[at]!;
    const put = (changed: Routine) => {
      tree = { ...tree, [file]: list.map((old, place) => (place === at ? changed : old)) };
    };
    const before = tree;
    if (what === 'add argument') {
      serial += 1;
      put({ ...one, args: [...one.args, `x${serial}_n`] });
      made.push(`argument-added ${one.name}`);
    } else if (what === 'drop argument' && one.args.length > 1) {
      put({ ...one, args: one.args.slice(0, -1) });
      made.push(`argument-removed ${one.name}`);
    } else if (what === 'swap arguments' && one.args.length > 1) {
      const [first, second, ...rest] = one.args as [string, string, ...string[]];
      put({ ...one, args: [second, first, ...rest] });
      made.push(`argument-reordered ${one.name}`);
    } else if (what === 'add routine') {
      const fresh = routine(2);
      tree = { ...tree, [file]: [...list, fresh] };
      made.push(`procedure-added ${fresh.name}`);
    } else if (what === 'drop routine' && list.length > 1) {
      tree = { ...tree, [file]: list.filter((old) => old !== one) };
      made.push(`procedure-removed ${one.name}`);
    } else if (what === 'body') {
      put({ ...one, constant: one.constant + 1_000 });
      // The factor of the result, and the number under the root where there are arguments.
      made.push(`expression-factor ${one.name}`);
      if (one.args.length > 0) made.push(`literal-value ${one.name}`);
    } else if (what === 'rename file') {
      const { [file]: moved, ...rest } = tree;
      tree = { ...rest, [`moved${commits.length}/${file.slice(file.lastIndexOf('/') + 1)}`]: moved! };
    } else if (what === 'move routine' && list.length > 1 && files.length > 1) {
      const target = files.find((other) => other !== file)!;
      tree = { ...tree, [file]: list.filter((old) => old !== one), [target]: [...tree[target]!, one] };
    } else if (what === 'reorder') {
      tree = { ...tree, [file]: [...list].reverse() };
    } else if (what === 'side branch') {
      // The side changes a file that the main line never does, both go on, and a merge joins them.
      const fork = commits.length - 1;
      const side = tree['side.c']![0]!;
      serial += 1;
      const changed = { ...side, args: [...side.args, `x${serial}_s`] };
      const text = render({ 'side.c': [changed] }, 0, '');
      commits.push({ subject: `${subject} side`, files: text });
      truth.set(`${subject} side`, [`argument-added ${side.name}`]);
      put({ ...one, constant: one.constant + 1_000 });
      // The factor of the result, and the number under the root where there are arguments.
      made.push(`expression-factor ${one.name}`);
      if (one.args.length > 0) made.push(`literal-value ${one.name}`);
      truth.set(`${subject} main`, made);
      commits.push({ subject: `${subject} main`, parents: [fork], files: difference(before, tree, 0, '') });
      tree = { ...tree, 'side.c': [changed] };
      commits.push({ subject: `${subject} merge`, parents: [commits.length - 1, commits.length - 2], files: text });
      continue;
    }
    const layout = what === 'layout' ? pick : 0;
    const comment = what === 'comment' ? `/* remark ${pick} */\n` : '';
    const only = what === 'layout' || what === 'comment' ? { [file]: tree[file]! } : null;
    commits.push({ subject, files: only === null ? difference(before, tree, 0, '') : render(only, layout, comment) });
    truth.set(subject, made);
  }
  return { commits, truth };
}

function difference(before: Tree, after: Tree, layout: number, comment: string): Record<string, string | null> {
  const changed: Record<string, string | null> = {};
  for (const file of Object.keys(before)) if (after[file] === undefined) changed[file] = null;
  for (const [file, list] of Object.entries(after)) {
    if (before[file] !== list) Object.assign(changed, render({ [file]: list }, layout, comment));
  }
  return changed;
}

function render(tree: Tree, layout: number, comment: string): Record<string, string> {
  const indent = ' '.repeat(2 + (layout % 5));
  const join = layout % 2 === 0 ? ', ' : `,\n${indent}`;
  return Object.fromEntries(
    Object.entries(tree).map(([file, list]) => [
      file,
      comment +
        list
          .map(({ name, args, constant }) => {
            const sum = args
              .map((arg, at) => `${arg} * ${at + 2}.0 + sqrt(${arg} + ${constant}.0) / exp(${at}.0 - ${arg})`)
              .join(' + ');
            return `double ${name}(${args.map((arg) => `double ${arg}`).join(join)})\n{\n${indent}double s = ${sum};\n${indent}return s * ${constant}.0;\n}\n`;
          })
          .join('\n'),
    ]),
  );
}

/** `mortise interface PATH…`: what a reader sees. */
import type { Declared, FileInterface, TableAxisRead } from '../model/interface.ts';
import { printable } from '../model/printable.ts';
import { shortNumber } from '../model/short-number.ts';
import { type Command, EXIT, UsageError } from './command.ts';
import { DEFINE, readPaths } from './read-paths.ts';

export const command: Command = {
  name: 'interface',
  answers: 'what a reader sees in source files and tables',
  usage: 'mortise interface PATH… [--at REV]',
  options: {
    define: DEFINE,
  },
  help: `
Reads files, or every source file and table below folders, in the work tree or straight from git at a revision. Nothing is
compiled or run. Names are spelled as the language compares them: Fortran in lower case.

  mortise interface src/eos --at v2.1 --json

With --json: {revision, files: {PATH: {language, form, procedures, commons, types, constants, calls, claims, incomplete, …}}}.`,
  async run(invocation, surroundings) {
    if (invocation.words.length === 0)
      throw new UsageError('mortise interface needs a file or a folder; "." is all of the code');
    const { files, revision } = await readPaths(invocation.words, invocation, surroundings);
    if (surroundings.signal.aborted) return EXIT.interrupted;
    surroundings.out(
      invocation.options.json === true
        ? `${JSON.stringify({ revision, files: Object.fromEntries(Object.entries(files).map(([path, read]) => [path, withCounts(read)])) })}\n`
        : Object.entries(files)
            .map(([path, read]) => fileText(path, read))
            .join('\n'),
    );
    return EXIT.ok;
  },
};

/** The published shape tells of each call how many arguments it passes. */
function withCounts(read: FileInterface) {
  return { ...read, calls: read.calls.map((call) => ({ ...call, nargs: call.args.length })) };
}

function fileText(path: string, read: FileInterface): string {
  const lines = [`${printable(path)}  ${read.language}${read.form === undefined ? '' : `, ${read.form} form`}`];
  for (const one of read.procedures) {
    const parent = one.parent === null ? '' : `${one.parent}::`;
    const result = one.result === null ? '' : ` -> ${typeText(one.result)}`;
    lines.push(
      `  ${String(one.line).padStart(5)}  ${one.kind} ${parent}${one.name}${one.prototype === true ? ' (prototype)' : ''}${result}`,
    );
    for (const arg of one.args) {
      const claims = read.claims.filter(
        (claim) => claim.name === arg.name && claim.parent?.split('::').at(-1) === one.name,
      );
      const said = claims.map((claim) => `${claim.what} ${claim.value}`).join(', ');
      lines.push(
        `           ${arg.name}: ${typeText(arg)}${arg.intent === null ? '' : `, ${arg.intent}`}${arg.optional ? ', optional' : ''}${said === '' ? '' : `   (${said})`}`,
      );
    }
  }
  for (const one of read.commons)
    lines.push(
      `  ${String(one.line).padStart(5)}  common /${one.name}/ ${one.members.map((member) => `${member.name} ${typeText(member)}`).join(', ')}`,
    );
  for (const one of read.types)
    lines.push(
      `  ${String(one.line).padStart(5)}  ${one.kind} ${one.name}: ${one.fields.map((field) => field.name).join(', ')}`,
    );
  for (const one of read.constants) lines.push(`  ${String(one.line).padStart(5)}  constant ${one.name} = ${one.text}`);
  for (const one of read.datasets)
    lines.push(
      `         data ${one.name} ${one.type} [${one.shape.join(', ')}]${one.unit === undefined ? '' : ` ${one.unit}`}${axisText(one.axis)}`,
    );
  if (read.calls.length > 0) lines.push(`         ${read.calls.length} calls`);
  for (const one of read.incomplete) lines.push(`  ${String(one.line).padStart(5)}  NOT READ: ${one.why}`);
  return `${lines.map(printableLine).join('\n')}\n`;
}

function axisText(axis: TableAxisRead | undefined): string {
  if (axis === undefined) return '';
  const { first, last, points, spacing, logBase } = axis;
  const stored =
    logBase === undefined ? '' : `, ${logBase === 'e' ? 'natural logarithms' : `logarithms to base ${logBase}`}`;
  return `, axis ${shortNumber(first)} to ${shortNumber(last)}, ${points} points, ${spacing}${stored}`;
}

function printableLine(text: string): string {
  return text.slice(0, text.length - text.trimStart().length) + printable(text.trimStart());
}

function typeText(of: Declared): string {
  return `${of.type}${of.bytes === null ? '' : `*${of.bytes}`}${of.rank === 0 ? '' : `(${of.bounds.join(', ')})`}`;
}

/** Finds the command named on the command line, parses its options, runs it, and turns what it throws into a message and an exit status. */
import { parseArgs } from 'node:util';
import { printable } from '../model/printable.ts';
import { SourceProblem } from '../sources/source-problem.ts';
import {
  COMMON_OPTIONS,
  type Command,
  EXIT,
  type ExitStatus,
  type Invocation,
  type OptionSpec,
  type Surroundings,
  UsageError,
} from './command.ts';
import { COMMANDS } from './table.ts';

export async function runCommandLine(words: readonly string[]): Promise<ExitStatus> {
  const interrupt = new AbortController();
  const onSignal = () => interrupt.abort();
  process.once('SIGINT', onSignal);
  process.once('SIGTERM', onSignal);
  // A reader that stops early (`mortise drift | head`) is no error.
  process.stdout.on('error', (error: NodeJS.ErrnoException) => {
    if (error.code === 'EPIPE') process.exit(EXIT.ok);
    throw error;
  });
  return dispatch(words, {
    cwd: process.cwd(),
    env: process.env,
    stdin: process.stdin,
    stdoutIsTerminal: process.stdout.isTTY === true,
    columns: process.stdout.columns ?? 80,
    out: (text) => void process.stdout.write(text),
    err: (text) => void process.stderr.write(text),
    signal: interrupt.signal,
  });
}

/** The whole program as a function of its words and surroundings. */
export async function dispatch(words: readonly string[], surroundings: Surroundings): Promise<ExitStatus> {
  try {
    const [name = 'open', ...rest] = words[0]?.startsWith('-') ? ['open', ...words] : words;
    const load = COMMANDS[name === '--help' ? 'help' : name];
    if (load === undefined) throw new UsageError(`there is no command "${name}"${nearest(name)}`);
    const { command } = await load();
    const invocation = parse(command, rest);
    if (invocation.options.help === true) {
      surroundings.out(commandHelp(command));
      return EXIT.ok;
    }
    return await command.run(invocation, surroundings);
  } catch (error) {
    if (error instanceof SourceProblem) {
      surroundings.err(`mortise: ${printable(error.message)}\nNext: ${printable(error.next)}\n`);
      return EXIT.usage;
    }
    if (!(error instanceof UsageError)) throw error;
    surroundings.err(`mortise: ${error.message}\nNext: run "mortise help" for the commands and their options.\n`);
    return EXIT.usage;
  }
}

function parse(command: Command, words: readonly string[]): Invocation {
  const specs = { ...COMMON_OPTIONS, ...command.options };
  try {
    const { values, positionals } = parseArgs({
      args: [...words],
      allowPositionals: true,
      options: Object.fromEntries(
        Object.entries(specs).map(([name, { type, multiple }]) => [name, { type, multiple: multiple ?? false }]),
      ),
    });
    return { words: positionals, options: values as Invocation['options'] };
  } catch (error) {
    throw new UsageError(`${command.usage}: ${(error as Error).message}`);
  }
}

export function commandHelp(command: Command): string {
  const line = ([name, spec]: [string, OptionSpec]) =>
    `  ${`--${name}${spec.type === 'string' ? ` ${spec.value ?? 'VALUE'}` : ''}`.padEnd(24)} ${spec.says}\n`;
  const own = Object.entries(command.options).map(line).join('');
  const common = Object.entries(COMMON_OPTIONS).map(line).join('');
  return `${command.usage}\n${command.answers}\n\n${command.help.trim()}\n\n${own === '' ? '' : `Options:\n${own}\n`}Everywhere:\n${common}`;
}

function nearest(name: string): string {
  const known = Object.keys(COMMANDS).filter((candidate) => candidate[0] === name[0]);
  return known.length === 0 ? '' : ` (did you mean ${known.map((candidate) => `"${candidate}"`).join(' or ')}?)`;
}

/** Finds the command named on the command line, parses its options, runs it, and turns what it throws into a message and an exit status. */
import { parseArgs } from 'node:util';
import { didYouMean } from '../model/nearest.ts';
import { printable, printableJson, printableLines } from '../model/printable.ts';
import { SourceProblem } from '../sources/source-problem.ts';
import {
  COMMON_OPTIONS,
  type Command,
  EXIT,
  type ExitStatus,
  type Invocation,
  type Surroundings,
  UsageError,
} from './command.ts';
import { commandHelp } from './command-help.ts';
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
    if (load === undefined)
      throw new UsageError(`there is no command "${name}"${didYouMean(name, Object.keys(COMMANDS))}`);
    const { command } = await load();
    const invocation = parse(command, rest);
    if (invocation.options.help === true) {
      surroundings.out(commandHelp(command));
      return EXIT.ok;
    }
    // One place for every command: a document never carries what a terminal would act on.
    const out = (text: string) => surroundings.out(printableJson(text));
    return await command.run(invocation, invocation.options.json === true ? { ...surroundings, out } : surroundings);
  } catch (error) {
    if (error instanceof SourceProblem) {
      surroundings.err(`mortise: ${printable(error.message)}\nNext: ${printable(error.next)}\n`);
      return EXIT.usage;
    }
    if (error instanceof UsageError) {
      surroundings.err(
        `mortise: ${printable(error.message)}\nNext: run "mortise help" for the commands and their options.\n`,
      );
      return EXIT.usage;
    }
    surroundings.err(failureText(error));
    return EXIT.incomplete;
  }
}

/** A failing machine is named with its code; anything else is a fault of this program, told with where it stands. */
function failureText(error: unknown): string {
  const { message, stack, code } = error as NodeJS.ErrnoException;
  if (code !== undefined && /^E[A-Z]+$/.test(code))
    return `mortise: the machine could not do it: ${printable(message)}\nNext: mend that, and run the command again.\n`;
  return `mortise: a fault of this program: ${printableLines(stack ?? String(error))}\nNext: report these lines with the command that was run.\n`;
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

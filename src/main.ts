/** Start-up: the words of the command line come in, an exit status leaves. Nothing heavy is imported here. */
import { runCommandLine } from './commands/run-command-line.ts';

declare const MORTISE_VERSION: string;

const words = process.argv.slice(2);
if (words[0] === '--version' && words.length === 1) {
  process.stdout.write(`mortise ${MORTISE_VERSION}\n`);
} else {
  process.exitCode = await runCommandLine(words);
}

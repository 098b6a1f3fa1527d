/** `mortise help [TOPIC or FINDING]`: the commands, one command, or what a kind of finding means. */

import type { FindingKind } from '../model/finding-kind.ts';
import { didYouMean } from '../model/nearest.ts';
import { explanationText } from '../report/explanation-text.ts';
import { explanations } from '../report/explanations/all.ts';
import { type Command, EXIT, UsageError } from './command.ts';
import { commandHelp } from './command-help.ts';
import { COMMANDS } from './table.ts';
import { textOptions } from './text-options.ts';
import { version } from './version.ts';

export const command: Command = {
  name: 'help',
  answers: 'explains a command or a kind of finding',
  usage: 'mortise help [COMMAND or FINDING]',
  options: {
    findings: { type: 'boolean', says: 'list every kind of finding' },
  },
  help: `
  mortise help audit               a command with its options
  mortise help drift-undeclared    what a finding means, how it arises, how to mend it, when to accept it
  mortise help --findings          every kind of finding`,
  async run(invocation, surroundings) {
    const [topic, ...more] = invocation.words;
    if (more.length > 0) throw new UsageError('mortise help takes one command or finding');
    const options = textOptions(invocation, surroundings);
    if (invocation.options.findings === true) {
      const kinds = Object.keys(explanations).sort();
      surroundings.out(
        invocation.options.json === true ? `${JSON.stringify(explanations, null, 2)}\n` : `${kinds.join('\n')}\n`,
      );
      return EXIT.ok;
    }
    if (topic === undefined) {
      surroundings.out(await overview());
      return EXIT.ok;
    }
    const load = COMMANDS[topic];
    if (load !== undefined) {
      surroundings.out(commandHelp((await load()).command));
      return EXIT.ok;
    }
    const page = explanations[topic as FindingKind];
    if (page === undefined) {
      throw new UsageError(
        `there is no command or finding "${topic}"${didYouMean(topic, [...Object.keys(COMMANDS), ...Object.keys(explanations)])}`,
      );
    }
    surroundings.out(
      invocation.options.json === true
        ? `${JSON.stringify({ finding: topic, ...page }, null, 2)}\n`
        : explanationText(topic, page, options),
    );
    return EXIT.ok;
  },
};

async function overview(): Promise<string> {
  const commands = await Promise.all(Object.values(COMMANDS).map(async (load) => (await load()).command));
  const lines = commands.map(
    (one) => `  ${(one.name === 'open' ? 'mortise' : `mortise ${one.name}`).padEnd(20)} ${one.answers}`,
  );
  return `mortise ${version()}: do the physics modules of a code fit together, drift, move results, and which made what

${lines.join('\n')}

"mortise help COMMAND" explains a command, "mortise help FINDING" a finding.
Exit status: 0 nothing of gravity stop; 1 a stop, or a clearance held; 2 wrong usage or unreadable manifests;
3 could not be completed; 130 interrupted.

Mortise compares and records; it certifies nothing. Where results can hurt someone, the responsible authority, local
codes and licensed practice decide.
`;
}

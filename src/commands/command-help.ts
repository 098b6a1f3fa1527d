/** The help text of one command. */
import { COMMON_OPTIONS, type Command, type OptionSpec } from './command.ts';

export function commandHelp(command: Command): string {
  const line = ([name, spec]: [string, OptionSpec]) =>
    `  ${`--${name}${spec.type === 'string' ? ` ${spec.value ?? 'VALUE'}` : ''}`.padEnd(24)} ${spec.says}\n`;
  const own = Object.entries(command.options).map(line).join('');
  const common = Object.entries(COMMON_OPTIONS).map(line).join('');
  return `${command.usage}\n${command.answers}\n\n${command.help.trim()}\n\n${own === '' ? '' : `Options:\n${own}\n`}Everywhere:\n${common}`;
}

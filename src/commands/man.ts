/** `mortise man`: the manual page, made from the table of commands. @source man(7), the macros of manual pages */
import { COMMON_OPTIONS, type Command, EXIT, type OptionSpec } from './command.ts';
import { COMMANDS } from './table.ts';
import { version } from './version.ts';

export const command: Command = {
  name: 'man',
  answers: 'the manual page, for man',
  usage: 'mortise man',
  options: {},
  help: `
  mortise man > ~/.local/share/man/man1/mortise.1
  mortise man | man -l -`,
  async run(invocation, surroundings) {
    const commands = await Promise.all(Object.values(COMMANDS).map(async (load) => (await load()).command));
    const page = manualPage(commands, version());
    surroundings.out(invocation.options.json === true ? `${JSON.stringify({ page }, null, 2)}\n` : page);
    return EXIT.ok;
  },
};

export function manualPage(commands: readonly Command[], itsVersion: string): string {
  return `.TH MORTISE 1 "" "mortise ${roff(itsVersion)}" "User Commands"
.SH NAME
mortise \\- do the physics modules of a simulation code fit together, drift, move results, and which made what
.SH SYNOPSIS
.B mortise
.RI [ COMMAND ]
.RI [ OPTION ...]
.SH DESCRIPTION
Reads the modules, manifests and git history of a long-lived simulation code. Without a command the terminal screens open.
Mortise compares and records; it certifies nothing.
.SH COMMANDS
${commands.map(commandPart).join('')}.SH OPTIONS OF EVERY COMMAND
${Object.entries(COMMON_OPTIONS).map(optionPart).join('')}.SH EXIT STATUS
.TP
.B 0
Nothing of gravity stop was found.
.TP
.B 1
A stop was found, or a clearance is held.
.TP
.B 2
Wrong usage, or manifests that can not be read.
.TP
.B 3
Something could not be completed.
.TP
.B 130
Interrupted.
.SH ENVIRONMENT
.TP
.B NO_COLOR
No colour when it is set to anything.
.TP
.B MORTISE_STORE
Folder of kept builds and results, in place of the one inside the git folder.
.TP
.B XDG_CACHE_HOME
Folder of what can be made again.
`;
}

function commandPart(one: Command): string {
  return `.SS ${roff(one.name)}
.B ${roff(one.usage)}
.PP
${roff(sentence(one.answers))}
.PP
.nf
${roff(one.help.trim())}
.fi
${Object.entries(one.options).map(optionPart).join('')}`;
}

function optionPart([name, spec]: [string, OptionSpec]): string {
  const value = spec.type === 'string' ? ` \\fI${roff(spec.value ?? 'VALUE')}\\fR` : '';
  return `.TP\n\\fB\\-\\-${roff(name)}\\fR${value}\n${roff(sentence(spec.says))}\n`;
}

function sentence(text: string): string {
  const end = /[.?]$/.test(text) ? '' : '.';
  return `${text.charAt(0).toUpperCase()}${text.slice(1)}${end}`;
}

/** Text that the formatter leaves as it is: no escape, no request at the beginning of a line, hyphens that can be copied. */
function roff(text: string): string {
  return text
    .replaceAll('\\', '\\e')
    .replaceAll('-', '\\-')
    .replace(/^([.'])/gm, '\\&$1');
}

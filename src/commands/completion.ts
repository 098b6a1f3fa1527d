/** `mortise completion SHELL`: what a shell needs to complete commands and options, made from the table of commands. */
import { COMMON_OPTIONS, type Command, EXIT, type OptionSpec, UsageError } from './command.ts';
import { COMMANDS } from './table.ts';

export const command: Command = {
  name: 'completion',
  answers: 'completion of commands and options for your shell',
  usage: 'mortise completion bash|zsh|fish',
  options: {},
  help: `
  mortise completion bash > ~/.local/share/bash-completion/completions/mortise
  mortise completion zsh > ~/.zfunc/_mortise        with ~/.zfunc in fpath before compinit
  mortise completion fish > ~/.config/fish/completions/mortise.fish`,
  async run(invocation, surroundings) {
    const [shell, ...more] = invocation.words;
    const write = SHELLS[shell ?? ''];
    if (write === undefined || more.length > 0)
      throw new UsageError(`mortise completion takes one shell: ${Object.keys(SHELLS).join(', ')}`);
    const script = write(await Promise.all(Object.values(COMMANDS).map(async (load) => (await load()).command)));
    surroundings.out(invocation.options.json === true ? `${JSON.stringify({ shell, script }, null, 2)}\n` : script);
    return EXIT.ok;
  },
};

const SHELLS: Readonly<Record<string, (commands: readonly Command[]) => string>> = { bash, zsh, fish };

function optionsOf(command: Command): [string, OptionSpec][] {
  return Object.entries({ ...command.options, ...COMMON_OPTIONS });
}

function bash(commands: readonly Command[]): string {
  const words = (command: Command) =>
    optionsOf(command)
      .map(([name]) => `--${name}`)
      .join(' ');
  const takesValue = (command: Command) =>
    optionsOf(command)
      .filter(([, spec]) => spec.type === 'string')
      .map(([name]) => `--${name}`)
      .join('|');
  return `# Completion of mortise for bash; made by "mortise completion bash".
_mortise() {
  local word=\${COMP_WORDS[COMP_CWORD]} before=\${COMP_WORDS[COMP_CWORD - 1]} options= values=
  COMPREPLY=()
  if [ "$COMP_CWORD" -eq 1 ]; then
    COMPREPLY=($(compgen -W '${commands.map((one) => one.name).join(' ')}' -- "$word"))
    return
  fi
  case "\${COMP_WORDS[1]}" in
${commands.map((one) => `    ${one.name}) options='${words(one)}' values='${takesValue(one)}' ;;`).join('\n')}
  esac
  case "|$values|" in
    *"|$before|"*) COMPREPLY=($(compgen -f -- "$word")); return ;;
  esac
  if [[ $word == -* ]]; then
    COMPREPLY=($(compgen -W "$options" -- "$word"))
  elif [ "\${COMP_WORDS[1]}" = help ]; then
    COMPREPLY=($(compgen -W '${commands.map((one) => one.name).join(' ')}' -- "$word"))
  else
    COMPREPLY=($(compgen -f -- "$word"))
  fi
}
complete -o filenames -F _mortise mortise
`;
}

function zsh(commands: readonly Command[]): string {
  const text = (says: string) => says.replaceAll("'", "'\\''").replace(/[[\]:\\]/g, (one) => `\\${one}`);
  const option = ([name, spec]: [string, OptionSpec]) =>
    `'${spec.multiple === true ? '*' : ''}--${name}[${text(spec.says)}]${spec.type === 'string' ? `:${text(spec.value ?? 'VALUE')}:_files` : ''}'`;
  return `#compdef mortise
# Completion of mortise for zsh; made by "mortise completion zsh".
_mortise() {
  local -a commands
  commands=(
${commands.map((one) => `    '${one.name}:${text(one.answers)}'`).join('\n')}
  )
  if (( CURRENT == 2 )); then
    _describe command commands
    return
  fi
  local name=$words[2]
  shift words
  (( CURRENT-- ))
  case $name in
${commands.map((one) => `    ${one.name}) _arguments ${optionsOf(one).map(option).join(' ')} '*:file:_files' ;;`).join('\n')}
  esac
}
if [ "$funcstack[1]" = _mortise ]; then _mortise "$@"; else compdef _mortise mortise; fi
`;
}

function fish(commands: readonly Command[]): string {
  const text = (says: string) => `'${says.replace(/['\\]/g, (one) => `\\${one}`)}'`;
  const lines = commands.flatMap((one) => [
    `complete -c mortise -n __fish_use_subcommand -f -a ${one.name} -d ${text(one.answers)}`,
    ...optionsOf(one).map(
      ([name, spec]) =>
        `complete -c mortise -n '__fish_seen_subcommand_from ${one.name}' -l ${name}${spec.type === 'string' ? ' -r' : ''} -d ${text(spec.says)}`,
    ),
  ]);
  return `# Completion of mortise for fish; made by "mortise completion fish".\n${lines.join('\n')}\n`;
}

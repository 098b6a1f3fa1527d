/** A drafted module as the text of a manifest, with what was read and where in comments. Pure. */

import { printable } from '../../model/printable.ts';
import type { Promotion } from '../promotion.ts';
import type { DraftedArgument, DraftedModule } from './draft-modules.ts';

export interface DraftVersion {
  readonly version: string;
  /** What says so: `tag v1.2`, `VERSION`; null when nothing does. */
  readonly from: string | null;
}

/** Text of `manifests/modules/NAME.yaml`. What nothing says is marked `# unknown`. */
export function moduleDraftText(module: DraftedModule, version: DraftVersion): string {
  const lines = [
    '# Drafted by "mortise draft" from the source; read it before you trust it.',
    `module: ${module.module}`,
    `component: ${module.component}  # ${module.guessedFrom === null ? 'unknown: say which role it fills' : `guessed from ${module.guessedFrom}`}`,
    `version: ${version.version}  # ${version.from === null ? 'unknown: nothing here declares a version' : `from ${version.from}`}`,
    'source:',
    `  language: ${module.language}`,
    '  files:',
    ...module.files.map((file) => `    - ${quoted(file)}`),
  ];
  if (module.procedures.length > 0) {
    lines.push('  procedures:', ...module.procedures.map((one) => `    - ${quoted(one.name)}`));
    lines.push('# What the reader saw. Bind arguments to the quantities of a contract under "offers" where one fits.');
    for (const one of module.procedures) {
      lines.push(`#   ${one.name}, line ${one.line}`);
      for (const arg of one.arguments) lines.push(`#     ${arg.name}: ${arg.type}${unitText(arg)}`);
    }
  }
  return `${lines.map(oneLine).join('\n')}\n`;
}

function unitText(arg: DraftedArgument): string {
  const unit =
    arg.unit === null
      ? ', unit unknown'
      : `, unit ${arg.unit.value} (line ${arg.unit.line}: ${printable(arg.unit.text).trim()})`;
  return unit + arg.claims.map((claim) => `, ${claim.what} ${claim.value} (line ${claim.line})`).join('');
}

/** Text of `manifests/assembly.yaml`: the first module of each component is plugged in, the others stand in a comment. */
export function assemblyDraftText(
  name: string,
  modules: readonly DraftedModule[],
  promotion: Promotion | null = null,
): string {
  const byComponent = new Map<string, DraftedModule[]>();
  for (const module of modules) {
    if (module.component === 'unknown') continue;
    byComponent.set(module.component, [...(byComponent.get(module.component) ?? []), module]);
  }
  const lines = [
    '# Drafted by "mortise draft" from the source; read it before you trust it.',
    `assembly: ${name}`,
    byComponent.size === 0 ? 'plugged: {}  # unknown: say which module fills which component' : 'plugged:',
    ...[...byComponent].map(([component, [first, ...others]]) => {
      const rest =
        others.length === 0
          ? ''
          : `  # or ${others
              .slice(0, 8)
              .map((one) => one.module)
              .join(', ')}${others.length > 8 ? ', …' : ''}`;
      return `  ${component}: ${first!.module}${rest}`;
    }),
    ...buildLines(promotion),
  ];
  return `${lines.map(oneLine).join('\n')}\n`;
}

/** A build can't be guessed; the switches of the makefiles can be read. Both wait as comments for someone who knows. */
function buildLines(promotion: Promotion | null): string[] {
  if (promotion === null) return [];
  const bytes = Object.entries(promotion.bytes).map(([type, size]) => `${type}: ${size}`);
  const said = promotion.said.map(({ place, text }) => `${text} in ${place.file}:${place.line}`);
  return [
    '# build:',
    '#   run: make     # unknown: the command that builds it',
    '#   makes: [bin]  # unknown: what it makes',
    `#   promote: {${bytes.join(', ')}}  # ${said.join(', ')}; holds already while no build is stated`,
  ];
}

/** Nothing from the source may end a comment or a line. */
function oneLine(text: string): string {
  const lead = /^ */.exec(text)![0];
  return lead + printable(text.slice(lead.length));
}

function quoted(text: string): string {
  return /^[A-Za-z][\w./-]*$/.test(text) && !/^(?:true|false|yes|no|on|off|null|y|n)$/i.test(text)
    ? text
    : JSON.stringify(text);
}

/** Modules proposed for code that declares none: one a source file, with what names, folders and comments say of it. Pure. */
import type { Claim, FileInterface, Language, Procedure } from '../../model/interface.ts';
import { compareText } from '../../model/place.ts';

export interface DraftedModule {
  readonly module: string;
  readonly component: string;
  /** What the component was guessed from; null when it is not known. */
  readonly guessedFrom: string | null;
  readonly language: Language;
  readonly files: readonly string[];
  readonly procedures: readonly DraftedProcedure[];
}

export interface DraftedProcedure {
  readonly name: string;
  readonly line: number;
  readonly arguments: readonly DraftedArgument[];
}

export interface DraftedArgument {
  readonly name: string;
  readonly type: string;
  /** As a comment or name says; null where nothing does. */
  readonly unit: { readonly value: string; readonly line: number; readonly text: string } | null;
  /** Other conventions that something claims: `log-base 10`. */
  readonly claims: readonly { readonly what: string; readonly value: string; readonly line: number }[];
}

/** Words in paths and names, and the component that they speak of; the first that meets wins. */
const COMPONENTS: readonly (readonly [RegExp, string])[] = [
  [/(^|[^a-z])(eos|equation[_-]?of[_-]?state|gas[_-]?state|helmeos)/, 'equation-of-state'],
  [/opac|kappa/, 'opacity'],
  [/(^|[^a-z])(rates?|reaclib|reaction)/, 'reaction-rates'],
  [/network|(^|[^a-z])net([^a-z]|$)|burn/, 'network'],
  [/cool|heating/, 'cooling'],
  [/ionis|ioniz|saha/, 'ionisation'],
  [/hydro|riemann|godunov|ppm|euler/, 'hydrodynamics'],
  [/gravit|poisson|multigrid/, 'gravity'],
  [/radiat|transport|transfer|neutrino/, 'transport'],
  [/conduct|diffus/, 'thermal-conduction'],
  [/const(ants?)?([^a-z]|$)|physcon/, 'physical-constants'],
  [/flux(es)?|surface/, 'surface-fluxes'],
];

/**
 * @param files  interfaces by path
 * @returns in the order of their names; a file without procedures or constants makes no module
 */
export function draftModules(files: ReadonlyMap<string, FileInterface>): DraftedModule[] {
  const drafted: DraftedModule[] = [];
  const taken = new Set<string>();
  for (const [path, read] of [...files].sort(([a], [b]) => compareText(a, b))) {
    if (read.language === 'table') continue;
    const procedures = read.procedures.filter(isOffered);
    if (procedures.length === 0 && read.constants.length < 3) continue;
    const { component, from } = componentOf(path, procedures);
    drafted.push({
      module: nameFor(path, taken),
      component,
      guessedFrom: from,
      language: read.language,
      files: [path],
      procedures: procedures.map((one) => procedureOf(one, read.claims)),
    });
  }
  return drafted;
}

function isOffered(one: Procedure): boolean {
  if (one.prototype === true || one.visibility === 'private') return false;
  return one.kind === 'function' || one.kind === 'subroutine' || one.kind === 'entry';
}

function componentOf(path: string, procedures: readonly Procedure[]): { component: string; from: string | null } {
  const low = path.toLowerCase();
  const base = low.slice(low.lastIndexOf('/') + 1).replace(/\.\w+$/, '');
  const folder = low.includes('/') ? low.slice(0, low.lastIndexOf('/')) : '';
  const names = procedures.map((one) => one.name.toLowerCase()).join(' ');
  for (const [text, from] of [
    [base, 'the name of the file'],
    [folder, 'the folder'],
    [names, 'the names of its procedures'],
  ] as const) {
    const found = COMPONENTS.find(([words]) => words.test(text));
    if (found !== undefined) return { component: found[1], from };
  }
  return { component: 'unknown', from: null };
}

/** The file's name, with its folder where two files share it. Manifest names are lower case with hyphens. */
function nameFor(path: string, taken: Set<string>): string {
  const parts = path
    .replace(/\.\w+$/, '')
    .split('/')
    .reverse();
  let name = '';
  for (const part of parts) {
    name = name === '' ? slug(part) : `${slug(part)}-${name}`;
    if (!taken.has(name)) break;
  }
  while (taken.has(name)) name = `${name}-2`;
  taken.add(name);
  return name;
}

function slug(text: string): string {
  const plain = text
    .toLowerCase()
    .replace(/[^a-z0-9]+/g, '-')
    .replace(/^-+|-+$/g, '');
  return /^[a-z]/.test(plain) ? plain : `m-${plain}`;
}

function procedureOf(one: Procedure, claims: readonly Claim[]): DraftedProcedure {
  const own = claims.filter((claim) => claim.parent?.split('::').at(-1) === one.name);
  return {
    name: one.name,
    line: one.line,
    arguments: one.args.map((arg) => {
      const about = own.filter((claim) => claim.name === arg.name);
      const unit = about.find((claim) => claim.what === 'unit');
      return {
        name: arg.name,
        type: `${arg.type}${arg.bytes === null ? '' : `*${arg.bytes}`}${arg.rank === 0 ? '' : `, rank ${arg.rank}`}`,
        unit: unit === undefined ? null : { value: unit.value, line: unit.line, text: unit.text },
        claims: about.filter((claim) => claim.what !== 'unit').map(({ what, value, line }) => ({ what, value, line })),
      };
    }),
  };
}

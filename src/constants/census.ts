/** Interfaces of many files in; every physical constant in them with its edition, and what is doubtful about constants and literals out. */
import { type Evidence, type Finding, sortFindings } from '../model/finding.ts';
import type { FileInterface } from '../model/interface.ts';
import { comparePlaces, type Place } from '../model/place.ts';
import { digitsOf } from './digits.ts';
import { doubtfulLiterals } from './doubtful-literals.ts';
import { type Recognised, recognise } from './recognise.ts';

export interface CensusOptions {
  /** The module that a file belongs to; its folder when absent. */
  readonly moduleOf?: (path: string) => string;
  /** Bytes that the build gives a declared default, as `{real: 8}`. */
  readonly promote?: Readonly<Record<string, number>>;
  readonly revision?: string;
}

export interface CensusEntry extends Recognised {
  readonly module: string;
  readonly place: Place;
  /** The name it has in the code; null for a bare literal. */
  readonly name: string | null;
  readonly procedure: string | null;
  /** As written. */
  readonly text: string;
}

export interface Census {
  readonly constants: readonly CensusEntry[];
  readonly findings: readonly Finding[];
}

/** @param files  interface by path, relative to the root of the repository */
export function census(files: ReadonlyMap<string, FileInterface>, options: CensusOptions = {}): Census {
  const constants: CensusEntry[] = [];
  const findings: Finding[] = [];
  for (const [file, read] of files) {
    if (read.language === 'table') continue;
    const module = (options.moduleOf ?? folderOf)(file);
    const placed = (at: { readonly line: number; readonly column: number }): Place => ({
      file,
      line: at.line,
      column: at.column,
      ...(options.revision === undefined ? {} : { revision: options.revision }),
    });
    // A named constant is told by its own entry; the literal that initialises it stands on the same line.
    const named = new Set<string>();
    for (const constant of read.constants) {
      const literal = soleLiteral(constant.text);
      if (literal === null) continue;
      named.add(`${constant.line} ${literal}`);
      const found = recognise(literal, constant.name);
      if (found !== null)
        constants.push({
          ...found,
          module,
          place: placed(constant),
          name: constant.name,
          procedure: constant.parent,
          text: literal,
        });
    }
    for (const literal of read.literals) {
      if (named.has(`${literal.line} ${literal.text}`)) continue;
      const found = recognise(literal.text, literal.target ?? null);
      if (found !== null)
        constants.push({
          ...found,
          module,
          place: placed(literal),
          name: literal.target ?? null,
          procedure: literal.procedure,
          text: literal.text,
        });
    }
    findings.push(...doubtfulLiterals(read, module, placed, options.promote ?? {}));
  }
  constants.sort((a, b) => comparePlaces(a.place, b.place));
  findings.push(...disagreements(constants), ...mixedEditions(constants), ...slips(constants), ...shortened(constants));
  return { constants, findings: sortFindings(findings) };
}

/** `1.38d-16`, `(6.67e-8_dp)`: the one literal that an expression consists of. */
function soleLiteral(text: string): string | null {
  const bare = text
    .trim()
    .replace(/^\((.*)\)$/, '$1')
    .replace(/^(?:dble|real|double|float)\((.*?)(?:,\s*\w+)?\)$/i, '$1')
    .trim();
  return digitsOf(bare) === null ? null : bare;
}

/** Entries of one constant that differ beyond this are two values and not one value cut to fewer digits. */
const SAME = 1e-15;

function disagreements(constants: readonly CensusEntry[]): Finding[] {
  const findings: Finding[] = [];
  for (const [symbol, entries] of grouped(constants, ({ symbol }) => symbol)) {
    if (entries[0]!.of === 'mathematics') continue;
    const values = grouped(entries, ({ normalised }) => normalised.toPrecision(16));
    if (values.size < 2) continue;
    const numbers = [...values.values()].map(([entry]) => entry!.normalised);
    const spread = (Math.max(...numbers) - Math.min(...numbers)) / Math.abs(numbers[0]!);
    if (spread < SAME) continue;
    const modules = new Set(entries.map(({ module }) => module));
    const inside = [...grouped(entries, ({ module }) => module).values()].some(
      (own) => new Set(own.map(({ normalised }) => normalised.toPrecision(16))).size > 1,
    );
    const common = [...values.values()].sort((a, b) => b.length - a.length);
    const odd = common.at(-1)![0]!;
    findings.push({
      kind: 'constant-disagrees',
      // Below a part in a million it is a matter of editions; above, results feel it. Years are a choice of calendar.
      gravity: spread > 1e-6 && symbol !== 'year' ? 'caution' : 'note',
      ...(modules.size === 1 ? { module: odd.module } : {}),
      place: odd.place,
      says: `${odd.says} (${symbol}) has ${values.size} values ${modules.size === 1 ? `in ${odd.module}` : inside ? `in ${modules.size} modules, and inside one` : `in ${modules.size} modules`}, ${spread.toExponential(1)} apart`,
      evidence: common.flatMap((own) =>
        own.slice(0, 6).map(
          (entry): Evidence => ({
            says: `${entry.text} ${entry.unit}${entry.name === null ? '' : ` as ${entry.name}`}: ${editionText(entry)}${own.length > 6 && entry === own[5] ? `, and ${own.length - 6} more places` : ''}`,
            place: entry.place,
          }),
        ),
      ),
      next: 'Define the constant in one place and take it from there; say in the manifest which edition it follows.',
    });
  }
  return findings;
}

function mixedEditions(constants: readonly CensusEntry[]): Finding[] {
  const findings: Finding[] = [];
  for (const [file, entries] of grouped(constants, ({ place }) => place.file)) {
    const dated = entries.filter(
      ({ editions, of, agreement }) =>
        of === 'physics' &&
        agreement === 'printed' &&
        editions.length > 0 &&
        editions.every((edition) => /^\d{4}$/.test(edition)),
    );
    // No edition in which all of them stand together.
    const common = dated.reduce<readonly string[] | null>(
      (left, { editions }) => (left === null ? editions : left.filter((edition) => editions.includes(edition))),
      null,
    );
    if (dated.length < 2 || common === null || common.length > 0 || new Set(dated.map(({ symbol }) => symbol)).size < 2)
      continue;
    const first = dated[0]!;
    findings.push({
      kind: 'constant-edition-mixed',
      gravity: 'note',
      module: first.module,
      place: first.place,
      says: `${file} mixes constants of different CODATA editions`,
      evidence: dated.slice(0, 20).map((entry) => ({
        says: `${entry.name ?? entry.symbol} = ${entry.text}: ${editionText(entry)}`,
        place: entry.place,
      })),
      next: 'Take all constants from one edition, or say in the manifest why they differ.',
    });
  }
  return findings;
}

function slips(constants: readonly CensusEntry[]): Finding[] {
  return constants
    .filter(({ agreement, relativeError }) => agreement === null && relativeError > 0)
    .map((entry) => ({
      kind: 'constant-unlike-any-edition' as const,
      gravity: entry.relativeError > 1e-4 ? ('caution' as const) : ('note' as const),
      module: entry.module,
      place: entry.place,
      says: `${entry.text} is ${entry.relativeError.toExponential(1)} from the ${entry.says} and has the digits of no edition`,
      evidence: [{ says: `nearest: ${entry.nearest.digits} in SI (${entry.nearest.edition})`, place: entry.place }],
      next: 'Compare it digit by digit with its source; if another constant is meant, name it so.',
    }));
}

function shortened(constants: readonly CensusEntry[]): Finding[] {
  const findings: Finding[] = [];
  const short = constants.filter(
    ({ of, agreement, digitsLost, relativeError }) =>
      (of === 'mathematics' || (agreement === 'truncated' && relativeError > 1e-7)) &&
      digitsLost > 0 &&
      relativeError > 1e-14,
  );
  for (const [, entries] of grouped(short, ({ place, symbol }) => `${place.file} ${symbol}`)) {
    const worst = entries.reduce((a, b) => (b.relativeError > a.relativeError ? b : a));
    findings.push({
      kind: 'constant-truncated',
      gravity: worst.relativeError > 1e-6 ? 'caution' : 'note',
      module: worst.module,
      place: worst.place,
      says: `${worst.symbol} is written with ${worst.significant} digits (${worst.text}), ${worst.relativeError.toExponential(1)} off`,
      evidence: entries.slice(0, 10).map(({ text, place }) => ({ says: text, place })),
      next:
        worst.of === 'mathematics'
          ? `Write ${worst.nearest.digits}, or have it computed.`
          : `Write all digits of the edition: ${worst.nearest.digits} in SI.`,
    });
  }
  return findings;
}

function editionText({ editions, agreement, significant }: CensusEntry): string {
  if (editions.length === 0) return 'digits of no edition';
  const names = editions.map((edition) => (/^\d{4}$/.test(edition) ? edition : edition)).join(', ');
  const codata = /^\d{4}/.test(editions[0]!) ? `CODATA ${names}` : names;
  if (agreement === 'extended') return `${codata}, with further digits`;
  return agreement === 'printed' ? codata : `${codata}, ${agreement} to ${significant} digits`;
}

function folderOf(path: string): string {
  const at = path.lastIndexOf('/');
  return at < 0 ? '.' : path.slice(0, at);
}

function grouped<Item>(items: Iterable<Item>, key: (item: Item) => string): Map<string, Item[]> {
  const groups = new Map<string, Item[]>();
  for (const item of items) {
    const own = groups.get(key(item));
    if (own === undefined) groups.set(key(item), [item]);
    else own.push(item);
  }
  return groups;
}

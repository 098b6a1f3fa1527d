/** The states that runs visit, against the ranges of tables and offers: does a run leave what a module is valid for? */

import type { Finding } from '../model/finding.ts';
import type { Declaration, ModuleManifest, Range, TableAxis } from '../model/manifest.ts';
import { shortNumber } from '../model/short-number.ts';
import { conversion } from '../units/conversion.ts';

/** States visited, by quantity, each in its unit, and by what. */
export interface Visited {
  /** `case cloud-shock` or `the campaign`. */
  readonly by: string;
  /** Modules that took part. */
  readonly modules: ReadonlySet<string>;
  readonly states: Readonly<Record<string, { readonly range: Range; readonly unit: string }>>;
}

/**
 * Table axes and offered domains that do not hold the states visited.
 *
 * @param unitOf  the unit in which an offer's domain of a quantity is given
 * @param edgesRead  the ends of an axis in its unit: those of the table itself where it could be read, else those declared
 * @returns a stop for each end passed, with both values in the module's unit
 */
export function checkStates(
  modules: readonly Declaration<ModuleManifest>[],
  visited: readonly Visited[],
  unitOf: (module: ModuleManifest, offer: number, quantity: string) => string | null,
  edgesRead: (file: string, name: string, axis: TableAxis) => Range | null = (_file, _name, axis) => axis.range ?? null,
): Finding[] {
  const findings: Finding[] = [];
  for (const declaration of modules) {
    const manifest = declaration.value;
    const concerned = visited.filter((one) => one.modules.has(manifest.module));
    const tableAxes = new Map<string, Range>();
    manifest.tables?.forEach((table, tableIndex) => {
      for (const [axis, declared] of Object.entries(table.axes ?? {})) {
        const { quantity, unit } = declared;
        const range = edgesRead(table.file, axis, declared);
        if (range === null) continue;
        tableAxes.set(quantity, range);
        for (const one of concerned) {
          const says = passed(one, quantity, unit ?? null, range);
          if (says === null) continue;
          findings.push({
            kind: 'table-left',
            gravity: 'stop',
            module: manifest.module,
            place: declaration.placeOf([
              'tables',
              tableIndex,
              'axes',
              axis,
              ...(declared.range === undefined ? [] : ['range']),
            ]),
            says: `${capital(one.by)} leaves table ${table.file} of ${manifest.module}: ${says}.`,
            evidence: [],
            next: 'extend the table, plug in a module that is valid there, or keep the run inside.',
          });
        }
      }
    });
    manifest.offers?.forEach((offer, offerIndex) => {
      for (const [quantity, range] of Object.entries(offer.domain ?? {})) {
        // The table's edge was reported already; the same end again would say nothing new.
        const table = tableAxes.get(quantity);
        if (table !== undefined && table[0] === range[0] && table[1] === range[1]) continue;
        for (const one of concerned) {
          const says = passed(one, quantity, unitOf(manifest, offerIndex, quantity), range);
          if (says === null) continue;
          findings.push({
            kind: 'domain-left',
            gravity: 'stop',
            module: manifest.module,
            place: declaration.placeOf(['offers', offerIndex, 'domain', quantity]),
            says: `${capital(one.by)} leaves the domain of ${manifest.module}: ${says}.`,
            evidence: [],
            next: 'plug in a module that is valid there, or keep the run inside; widen the domain only if the module is shown to be valid.',
          });
        }
      }
    });
  }
  return findings;
}

/** `temperature reaches 3.2e7 K, valid to 1e7 K`; null when the states are inside or nothing is known of them. */
function passed(visited: Visited, quantity: string, unit: string | null, range: Range): string | null {
  const state = visited.states[quantity];
  if (state === undefined) return null;
  const factor = unit === null || unit === state.unit ? 1 : factorOf(state.unit, unit);
  if (factor === null) return null;
  const shown = unit ?? state.unit;
  const [low, high] = state.range.map((end) => (end === null ? null : end * factor));
  if (high != null && range[1] !== null && high > range[1]) {
    return `${quantity} reaches ${shortNumber(high)} ${shown}, valid up to ${shortNumber(range[1])} ${shown}`;
  }
  if (low != null && range[0] !== null && low < range[0]) {
    return `${quantity} falls to ${shortNumber(low)} ${shown}, valid from ${shortNumber(range[0])} ${shown}`;
  }
  return null;
}

function factorOf(from: string, to: string): number | null {
  const answer = conversion(from, to);
  return 'error' in answer ? null : answer.factor;
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

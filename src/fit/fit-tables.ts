/** What a manifest says of a table against what its offers promise and against the table itself. */
import { contractReference } from '../manifests/contract-reference.ts';
import type { Finding } from '../model/finding.ts';
import type { Dataset, FileInterface } from '../model/interface.ts';
import type { ManifestSet, Range, TableAxis } from '../model/manifest.ts';
import { convertRange, outside, rangeText, sameEnds } from './domains.ts';
import { findingAt, firstThere, seenIn } from './finding-at.ts';
import type { LinkedModule } from './linked-module.ts';
import { relateUnits } from './unit-relation.ts';

export function checkTables(module: LinkedModule, set: ManifestSet): Finding[] {
  return (module.declaration.value.tables ?? []).flatMap((table, at) =>
    Object.entries(table.axes ?? {}).flatMap(([name, axis]) => {
      const dataset = datasetOf(module, table.file, name);
      const read = dataset === null ? null : axisRange(dataset, axis);
      return [
        ...(dataset === null ? [] : axisAgainstTable(module, at, name, axis, dataset)),
        ...offersAgainstAxis(module, set, at, name, axis, edgesOf(axis, read)),
      ];
    }),
  );
}

function datasetOf(module: LinkedModule, file: string, name: string): Dataset | null {
  return datasetNamed(module.tables.find(([path]) => path === file)?.[1], name);
}

/** The data set that a manifest means: a leading `/` may be left out. */
export function datasetNamed(read: FileInterface | undefined, name: string): Dataset | null {
  return read?.datasets.find((one) => one.name.replace(/^\//, '') === name.replace(/^\//, '')) ?? null;
}

/**
 * First and last point of an axis as values of its quantity: a table that says so, or an evenly spaced axis that the manifest calls
 * logarithmic, holds logarithms.
 */
export function axisRange(dataset: Dataset, axis: TableAxis): Range | null {
  if (dataset.axis === undefined) return null;
  const { first, last, spacing, logBase } = dataset.axis;
  const declared = axis.spacing === 'log10' ? 10 : axis.spacing === 'ln' ? Math.E : null;
  const said = logBase === undefined ? null : logBase === 'e' ? Math.E : Number(logBase);
  const base = said !== null && said > 1 ? said : spacing === 'linear' ? declared : null;
  const ends = base !== null ? [base ** first, base ** last] : [first, last];
  return ends[0]! <= ends[1]! ? [ends[0]!, ends[1]!] : [ends[1]!, ends[0]!];
}

/** Where an axis ends: in the table, unless the manifest gives the same ends in fewer digits. */
export function edgesOf(axis: TableAxis, read: Range | null): Range | null {
  const { range } = axis;
  if (range === undefined) return read;
  return read === null || sameEnds(read, range) ? range : read;
}

/** The range and unit declared for an axis, against those in the table. */
function axisAgainstTable(
  module: LinkedModule,
  at: number,
  name: string,
  axis: TableAxis,
  dataset: Dataset,
): Finding[] {
  const findings: Finding[] = [];
  const path = ['tables', at, 'axes', name];
  const read = axisRange(dataset, axis);
  if (read !== null && axis.range !== undefined && !sameEnds(read, axis.range)) {
    findings.push(
      findingAt(module.declaration, [...path, 'range'], {
        kind: 'table-range',
        gravity: 'stop',
        module: module.name,
        says: `The axis ${name} of the table covers ${rangeText(read, axis.unit)}; the manifest says ${rangeText(axis.range, axis.unit)}.`,
        next: `write [${read[0]}, ${read[1]}], or bring back the table that this was written for.`,
      }),
    );
  }
  if (axis.unit !== undefined && dataset.unit !== undefined) {
    const relation = relateUnits(dataset.unit, axis.unit);
    if (relation.is === 'scale' || relation.is === 'dimension') {
      findings.push(
        findingAt(module.declaration, [...path, 'unit'], {
          kind: 'claim-contradicts',
          gravity: 'caution',
          module: module.name,
          says: `The table says that ${name} is in ${dataset.unit}; the manifest says ${axis.unit}.`,
          next: 'find out which is right, and correct the other.',
        }),
      );
    }
  }
  return findings;
}

/** Every offer that promises states along this axis, against the ends of the axis. */
function offersAgainstAxis(
  module: LinkedModule,
  set: ManifestSet,
  at: number,
  name: string,
  axis: TableAxis,
  range: Range | null,
): Finding[] {
  if (range === null) return [];
  return (module.declaration.value.offers ?? []).flatMap((offer, index) => {
    const promised = offer.domain?.[axis.quantity];
    const quantity = set.contracts.get(contractReference(offer.contract).name)?.value.quantities[axis.quantity];
    if (promised === undefined || quantity === undefined) return [];
    const unit = offer.units?.[axis.quantity] ?? quantity.unit;
    const relation = relateUnits(axis.unit ?? unit, unit);
    if (relation.is === 'dimension' || relation.is === 'unknown') return [];
    const covered = relation.is === 'same' ? range : convertRange(range, relation.factor, relation.offset);
    const { below, above } = outside(promised, covered);
    if (!below && !above) return [];
    const tablePath = ['tables', at, 'axes', name];
    return [
      findingAt(module.declaration, ['offers', index, 'domain', axis.quantity], {
        kind: 'table-range',
        gravity: 'stop',
        module: module.name,
        says: `${module.name} promises ${axis.quantity} ${rangeText(promised, unit)}, and its table covers ${rangeText(covered, unit)}.`,
        evidence: [
          seenIn(
            module.declaration,
            firstThere(module.declaration, [...tablePath, 'range'], tablePath),
            `the axis ${name}`,
            'value',
          ),
        ],
        next: `promise ${rangeText(covered, unit)}, or make the table longer; what lies beyond its edge is clamped or extrapolated.`,
      }),
    ];
  });
}

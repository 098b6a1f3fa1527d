/** What changed about what manifests declare: contracts, units, conventions, domains, tables, tolerances. Pure. */
import type { ChangeKind } from '../model/bump.ts';
import type { Change } from '../model/change.ts';
import type { Case, Contract, Declaration, Domain, ModuleManifest, Range } from '../model/manifest.ts';

type SameUnit = (a: string, b: string) => boolean;

export function compareManifests(
  before: Declaration<ModuleManifest>,
  after: Declaration<ModuleManifest>,
  sameUnit: SameUnit,
): Change[] {
  const changes: Change[] = [];
  const add = adder(changes, before, after);
  const was = new Map((before.value.offers ?? []).map((offer) => [nameOf(offer.contract), offer]));
  const is = new Map((after.value.offers ?? []).map((offer) => [nameOf(offer.contract), offer]));
  const index = (contract: string) =>
    (after.value.offers ?? []).findIndex((offer) => nameOf(offer.contract) === contract);
  for (const [contract, b] of was) {
    const a = is.get(contract);
    if (a === undefined) {
      add('contract-changed', contract, `${contract} is no longer offered`, b.contract, undefined, ['offers']);
      continue;
    }
    const path = ['offers', index(contract)];
    if (majorOf(b.contract) !== majorOf(a.contract)) {
      add('contract-changed', contract, `${a.contract} is offered, was ${b.contract}`, b.contract, a.contract, [
        ...path,
        'contract',
      ]);
    }
    for (const quantity of keys(b.units, a.units)) {
      const [x, y] = [b.units?.[quantity], a.units?.[quantity]];
      if (x === y || (x !== undefined && y !== undefined && sameUnit(x, y))) continue;
      const says = `the unit of ${quantity} under ${contract} is ${y ?? "the contract's"}, was ${x ?? "the contract's"}`;
      add('unit-changed', quantity, says, x, y, [...path, 'units', quantity]);
    }
    for (const name of keys(b.conventions, a.conventions)) {
      const [x, y] = [b.conventions?.[name], a.conventions?.[name]];
      if (x === y) continue;
      const says = `${name} under ${contract} is ${y ?? 'not declared'}, was ${x ?? 'not declared'}`;
      if (x !== undefined) add('convention-changed', name, says, x, y, [...path, 'conventions', name]);
    }
    compareDomains(b.domain, a.domain, `under ${contract}`, [...path, 'domain'], add);
  }
  for (const contract of is.keys()) {
    if (was.has(contract)) continue;
    add('procedure-added', contract, `${contract} is offered`, undefined, is.get(contract)!.contract, [
      'offers',
      index(contract),
    ]);
  }
  const tables = new Map((before.value.tables ?? []).map((table) => [table.file, table]));
  for (const [place, table] of (after.value.tables ?? []).entries()) {
    const old = tables.get(table.file);
    if (old?.digest !== undefined && table.digest !== undefined && old.digest !== table.digest) {
      add('table-content', table.file, `table ${table.file} has other content`, old.digest, table.digest, [
        'tables',
        place,
        'digest',
      ]);
    }
    for (const [name, axis] of Object.entries(table.axes ?? {})) {
      const oldAxis = old?.axes?.[name];
      if (oldAxis?.range === undefined || axis.range === undefined) continue;
      compareRange(
        'table-edges',
        `axis ${name} of ${table.file}`,
        oldAxis.range,
        axis.range,
        ['tables', place, 'axes', name],
        add,
      );
    }
  }
  return changes;
}

export function compareContracts(
  before: Declaration<Contract>,
  after: Declaration<Contract>,
  sameUnit: SameUnit,
): Change[] {
  const changes: Change[] = [];
  const add = adder(changes, before, after);
  const { quantities: was } = before.value;
  const { quantities: is } = after.value;
  for (const name of Object.keys(was)) {
    const [b, a] = [was[name]!, is[name]];
    const path = ['quantities', name];
    if (a === undefined) {
      add('contract-changed', name, `quantity ${name} is gone`, b.unit, undefined, ['quantities']);
      continue;
    }
    if (!sameUnit(b.unit, a.unit))
      add('unit-changed', name, `the unit of ${name} is ${a.unit}, was ${b.unit}`, b.unit, a.unit, [...path, 'unit']);
    if (b.intent !== a.intent)
      add('argument-intent', name, `${name} is ${a.intent}, was ${b.intent}`, b.intent, a.intent, [...path, 'intent']);
    if (String(b.shape ?? 'scalar') !== String(a.shape ?? 'scalar')) {
      add(
        'argument-rank',
        name,
        `${name} is ${a.shape ?? 'scalar'}, was ${b.shape ?? 'scalar'}`,
        String(b.shape),
        String(a.shape),
        path,
      );
    }
    for (const convention of keys(b.conventions, a.conventions)) {
      const [x, y] = [b.conventions?.[convention], a.conventions?.[convention]];
      if (String(x) === String(y)) continue;
      const first = x?.[0] !== y?.[0];
      const says = `${convention} of ${name} is ${y?.join(' or ') ?? 'open'}, was ${x?.join(' or ') ?? 'open'}`;
      add(first ? 'convention-changed' : 'procedure-added', name, says, String(x), String(y), [...path, 'conventions']);
    }
    if (b.domain !== undefined || a.domain !== undefined) {
      compareRange('domain', name, b.domain ?? [null, null], a.domain ?? [null, null], [...path, 'domain'], add);
    }
  }
  for (const name of Object.keys(is)) {
    if (was[name] !== undefined) continue;
    const kind = is[name]!.optional === true ? 'optional-argument-added' : 'argument-added';
    add(kind, name, `quantity ${name} is new`, undefined, is[name]!.unit, ['quantities', name]);
  }
  return changes;
}

/** Tolerances that allow more than before. */
export function compareCases(before: Declaration<Case>, after: Declaration<Case>): Change[] {
  const changes: Change[] = [];
  const add = adder(changes, before, after);
  const old = tolerancesOf(before.value);
  for (const [name, { path, tolerance }] of tolerancesOf(after.value)) {
    const b = old.get(name)?.tolerance;
    if (b === undefined) continue;
    for (const measure of keys(b, tolerance)) {
      const [x, y] = [b[measure], tolerance[measure]];
      if (typeof x === 'number' && typeof y === 'number' && y > x) {
        add('tolerance-widened', name, `the ${measure} tolerance of ${name} is ${y}, was ${x}`, String(x), String(y), [
          ...path,
          'tolerance',
        ]);
      }
    }
  }
  return changes;
}

type Path = readonly (string | number)[];
type Add = (
  kind: ChangeKind,
  subject: string,
  says: string,
  was: string | undefined,
  is: string | undefined,
  path: Path,
) => void;

function adder(changes: Change[], before: Declaration<unknown>, after: Declaration<unknown>): Add {
  return (kind, subject, says, was, is, path) => {
    changes.push({
      kind,
      subject,
      says,
      ...(was === undefined ? {} : { before: { text: was, place: before.placeOf(path) } }),
      after: { text: is ?? 'nothing', place: after.placeOf(path) },
    });
  };
}

function compareDomains(
  before: Domain | undefined,
  after: Domain | undefined,
  where: string,
  path: Path,
  add: Add,
): void {
  for (const quantity of keys(before, after)) {
    const open: Range = [null, null];
    compareRange(
      'domain',
      `${quantity} ${where}`,
      before?.[quantity] ?? open,
      after?.[quantity] ?? open,
      [...path, quantity],
      add,
    );
  }
}

function compareRange(
  what: 'domain' | 'table-edges',
  name: string,
  before: Range,
  after: Range,
  path: Path,
  add: Add,
): void {
  const low = (range: Range) => range[0] ?? Number.NEGATIVE_INFINITY;
  const high = (range: Range) => range[1] ?? Number.POSITIVE_INFINITY;
  const text = (range: Range) => `[${range[0] ?? ''}, ${range[1] ?? ''}]`;
  const narrowed = low(after) > low(before) || high(after) < high(before);
  const widened = low(after) < low(before) || high(after) > high(before);
  if (!narrowed && !widened) return;
  const says = `the ${what === 'domain' ? 'domain' : 'range'} of ${name} is ${text(after)}, was ${text(before)}`;
  add(narrowed ? `${what}-narrowed` : `${what}-widened`, name, says, text(before), text(after), path);
}

function tolerancesOf(it: Case): Map<string, { path: Path; tolerance: Readonly<Record<string, unknown>> }> {
  const found = new Map<string, { path: Path; tolerance: Readonly<Record<string, unknown>> }>();
  const put = (name: string, path: Path, tolerance: unknown) => {
    if (tolerance !== undefined) found.set(name, { path, tolerance: tolerance as Readonly<Record<string, unknown>> });
  };
  for (const [index, output] of it.outputs.entries()) {
    for (const [name, quantity] of Object.entries(output.quantities))
      put(name, ['outputs', index, 'quantities', name], quantity.tolerance);
  }
  for (const [name, feature] of Object.entries(it.features ?? {})) put(name, ['features', name], feature.tolerance);
  for (const [index, total] of (it.conserved ?? []).entries()) {
    if (typeof total !== 'string') put(total.total, ['conserved', index], total.tolerance);
  }
  return found;
}

function keys(a: object | undefined, b: object | undefined): string[] {
  return [...new Set([...Object.keys(a ?? {}), ...Object.keys(b ?? {})])];
}

function nameOf(reference: string): string {
  return reference.split(/\s/)[0]!;
}

function majorOf(reference: string): string {
  return /\d+/.exec(reference.slice(nameOf(reference).length))?.[0] ?? '';
}

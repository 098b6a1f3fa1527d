/** Names in one manifest that another must declare, and what only holds between keys. Sound manifests come in, findings go out. */

import type { Finding, Gravity } from '../model/finding.ts';
import type { FindingKind } from '../model/finding-kind.ts';
import type { Assembly, Case, Contract, Declaration, ManifestSet, ModuleManifest } from '../model/manifest.ts';
import { nearest } from '../model/nearest.ts';
import { contractReference } from './contract-reference.ts';
import type { ManifestDeclaration } from './declaration.ts';
import { anyOf, problemFinding, quoted } from './problem.ts';
import type { ManifestSort } from './shapes.ts';

/** Names that manifests which are not sound would declare: whoever refers to them is not to blame. */
type UnsoundNames = (sort: ManifestSort) => readonly string[];
type Path = readonly (string | number)[];

export function crossReferences(set: ManifestSet, unsoundNames: UnsoundNames): Finding[] {
  const check = new Check(set, unsoundNames);
  if (set.assembly !== null) check.assembly(set.assembly);
  for (const module of set.modules.values()) check.module(module);
  for (const one of set.cases.values()) check.case(one);
  return check.findings;
}

class Check {
  readonly findings: Finding[] = [];
  private readonly set: ManifestSet;
  private readonly unsoundNames: UnsoundNames;

  constructor(set: ManifestSet, unsoundNames: UnsoundNames) {
    this.set = set;
    this.unsoundNames = unsoundNames;
  }

  assembly(declaration: Declaration<Assembly>): void {
    const { plugged, campaign } = declaration.value;
    for (const [component, name] of Object.entries(plugged)) {
      this.pluggedModule(declaration, ['plugged', component], component, name);
    }
    for (const quantity of Object.keys(campaign?.domain ?? {})) {
      this.known(declaration, ['campaign', 'domain', quantity], 'key', 'quantity', quantity, this.everyQuantity());
    }
    const measured = campaign?.cost?.['measured-by'];
    if (measured !== undefined && !this.isUnsound('case', measured)) {
      this.known(declaration, ['campaign', 'cost', 'measured-by'], 'value', 'case', measured, this.set.cases.keys());
    }
  }

  private isUnsound(sort: ManifestSort, name: string): boolean {
    return this.unsoundNames(sort).includes(name);
  }

  private pluggedModule(declaration: Declaration<unknown>, path: Path, component: string, name: string): void {
    if (this.isUnsound('module', name)) return;
    if (
      !this.known(declaration, path, 'value', 'module', name, [
        ...this.set.modules.keys(),
        ...this.unsoundNames('module'),
      ])
    )
      return;
    const module = this.set.modules.get(name)!;
    if (module.value.component === component) return;
    this.add(declaration, path, 'value', {
      says: `The module "${name}" fills ${module.value.component}, not ${component}.`,
      next: `plug it into ${module.value.component}, or name a module that fills ${component}${listed(this.modulesOf(component))}.`,
    });
  }

  module(declaration: Declaration<ModuleManifest>): void {
    const { offers = [], expects = [], tables = [], source, module } = declaration.value;
    for (const [at, offer] of offers.entries()) {
      const contract = this.contract(declaration, ['offers', at], offer.contract);
      if (contract !== null) {
        this.quantitiesOf(declaration, ['offers', at], offer, contract, ['arguments', 'units', 'domain']);
        this.conventionsOf(declaration, ['offers', at], offer.conventions ?? {}, contract);
      }
      const { procedures } = source;
      if (offer.procedure !== undefined && procedures !== undefined && !procedures.includes(offer.procedure)) {
        this.known(
          declaration,
          ['offers', at, 'procedure'],
          'value',
          'procedure under "source"',
          offer.procedure,
          procedures,
        );
      }
    }
    for (const [at, expectation] of expects.entries()) {
      const contract = this.contract(declaration, ['expects', at], expectation.contract);
      if (contract === null) continue;
      this.quantitiesOf(declaration, ['expects', at], expectation, contract, ['units', 'domain']);
      this.conventionsOf(declaration, ['expects', at], expectation.conventions ?? {}, contract);
      for (const key of ['takes', 'order'] as const) {
        for (const [index, quantity] of (expectation[key] ?? []).entries()) {
          const path = ['expects', at, key, index];
          this.known(
            declaration,
            path,
            'value',
            `quantity of ${contract.contract}`,
            quantity,
            Object.keys(contract.quantities),
          );
          if (expectation[key]!.indexOf(quantity) < index) {
            this.add(declaration, path, 'value', {
              says: `"${quantity}" stands twice under "${key}".`,
              next: 'name every quantity once.',
            });
          }
        }
      }
    }
    for (const [at, table] of tables.entries()) {
      for (const [axis, { quantity }] of Object.entries(table.axes ?? {})) {
        this.known(
          declaration,
          ['tables', at, 'axes', axis, 'quantity'],
          'value',
          'quantity',
          quantity,
          this.everyQuantity(),
        );
      }
    }
    for (const [at, offer] of offers.entries()) {
      const { name } = contractReference(offer.contract);
      if (offers.findIndex((other) => contractReference(other.contract).name === name) < at) {
        this.add(declaration, ['offers', at, 'contract'], 'value', {
          says: `The module "${module}" offers ${name} twice.`,
          next: 'keep one offer a contract; make a module of its own from the other.',
        });
      }
    }
  }

  private contract(declaration: Declaration<unknown>, path: Path, reference: string): Contract | null {
    const { name } = contractReference(reference);
    if (this.isUnsound('contract', name)) return null;
    if (!this.known(declaration, [...path, 'contract'], 'value', 'contract', name, this.set.contracts.keys()))
      return null;
    return this.set.contracts.get(name)!.value;
  }

  private quantitiesOf(
    declaration: Declaration<unknown>,
    path: Path,
    side: { readonly arguments?: object; readonly units?: object; readonly domain?: object },
    contract: Contract,
    keys: readonly ('arguments' | 'units' | 'domain')[],
  ): void {
    for (const key of keys) {
      for (const quantity of Object.keys(side[key] ?? {})) {
        this.known(
          declaration,
          [...path, key, quantity],
          'key',
          `quantity of ${contract.contract}`,
          quantity,
          Object.keys(contract.quantities),
        );
      }
    }
  }

  private conventionsOf(
    declaration: Declaration<unknown>,
    path: Path,
    conventions: Readonly<Record<string, string>>,
    contract: Contract,
  ): void {
    const open = conventionsOpen(contract);
    for (const [name, chosen] of Object.entries(conventions)) {
      const at = [...path, 'conventions', name];
      if (!this.known(declaration, at, 'key', `convention of ${contract.contract}`, name, open.keys())) continue;
      const choices = open.get(name)!;
      if (choices.includes(chosen)) continue;
      this.add(declaration, at, 'value', {
        says: `"${chosen}" is no choice for ${name} in ${contract.contract}.`,
        next: `write ${anyOf(choices)}, or add the choice to the contract with a new version.`,
      });
    }
  }

  case(declaration: Declaration<Case>): void {
    const one = declaration.value;
    const outputs = one.outputs.flatMap((output) => Object.keys(output.quantities));
    const plugged = this.set.assembly === null ? null : Object.keys(this.set.assembly.value.plugged);
    if (plugged !== null) {
      for (const [at, component] of (one.uses ?? []).entries()) {
        this.known(declaration, ['uses', at], 'value', 'component with a module plugged in', component, plugged);
      }
    }
    for (const [component, name] of Object.entries(one.with ?? {})) {
      this.pluggedModule(declaration, ['with', component], component, name);
    }
    for (const [name, feature] of Object.entries(one.features ?? {})) {
      this.known(declaration, ['features', name, 'of'], 'value', 'output quantity', feature.of, outputs);
      if (feature.take === 'crossing' && feature.level === undefined) {
        this.add(declaration, ['features', name, 'take'], 'value', {
          says: 'A crossing needs the level that is crossed.',
          next: 'add "level:" with a number.',
        });
      }
      if (feature.take === 'formula' && feature.formula === undefined) {
        this.add(declaration, ['features', name, 'take'], 'value', {
          says: 'A formula feature needs its formula.',
          next: 'add "formula:" with an expression such as maximum(pressure) / mean(pressure).',
        });
      }
    }
    for (const [at, total] of (one.conserved ?? []).entries()) {
      const [path, of] = typeof total === 'string' ? [['conserved', at], total] : [['conserved', at, 'of'], total.of];
      this.known(declaration, path, 'value', 'output quantity', of, outputs);
    }
    for (const [name, grid] of Object.entries(one['grid-error'] ?? {})) {
      const compared = [...outputs, ...Object.keys(one.features ?? {})];
      this.known(declaration, ['grid-error', name], 'key', 'quantity or feature', name, compared);
      for (const key of ['ratio', 'coarse-ratio'] as const) {
        if ((grid[key] ?? 2) > 1) continue;
        this.add(declaration, ['grid-error', name, key], 'value', {
          says: 'The coarser grid has the larger spacing: the ratio is above 1.',
          next: 'write the spacing of the coarser grid over that of the finer one.',
        });
      }
    }
    for (const [quantity, of] of Object.entries(one.footprint ?? {})) {
      this.known(declaration, ['footprint', quantity], 'key', 'quantity', quantity, this.everyQuantity());
      this.known(declaration, ['footprint', quantity], 'value', 'output quantity', of, outputs);
    }
    for (const [at, output] of one.outputs.entries()) {
      for (const quantity of Object.keys(output.quantities)) {
        if (outputs.indexOf(quantity) === outputs.lastIndexOf(quantity)) continue;
        const first = one.outputs.findIndex((other) => Object.hasOwn(other.quantities, quantity));
        if (first === at) continue;
        this.add(declaration, ['outputs', at, 'quantities', quantity], 'key', {
          says: `The output quantity "${quantity}" is declared for two files.`,
          next: 'give one of them another name.',
        });
      }
    }
    this.command(declaration, ['run'], one.run);
  }

  /** `{out}`, `{root}` and `{select.NAME}` are all that is filled in, and no shell reads the rest. */
  private command(declaration: Declaration<unknown>, path: Path, command: string): void {
    const selects = new Set(
      [...this.set.modules.values()]
        .flatMap((module) => Object.keys(module.value.select ?? {}))
        .map((name) => `select.${name}`),
    );
    for (const [, name = ''] of command.matchAll(/\{([^{}]*)\}/g)) {
      if (['out', 'root'].includes(name) || selects.has(name)) continue;
      if (name.startsWith('select.') && this.unsoundNames('module').length > 0) continue;
      const meant = nearest(name, ['out', 'root', ...selects]);
      this.add(declaration, path, 'value', {
        kind: 'manifest-unknown-name',
        says: `Nothing fills {${name}} in this command.`,
        next:
          meant === null
            ? `write ${anyOf(['{out}', '{root}'])}, or {select.NAME} with a NAME that a module declares under "select".`
            : `write {${meant}}.`,
      });
    }
    const shell = /(?:^|\s)(\||\|\||&&|;|>|>>|<|2>&1|&)(?=\s|$)|\$\(|`|\$\{?[A-Za-z_]/.exec(command);
    if (shell !== null) {
      this.add(declaration, path, 'value', {
        gravity: 'caution',
        says: `No shell reads this command: ${quoted(shell[0].trim())} would reach the program as it stands.`,
        next: 'put such steps into a script, and run the script.',
      });
    }
  }

  private everyQuantity(): string[] {
    return [...this.set.contracts.values()].flatMap((contract) => Object.keys(contract.value.quantities));
  }

  private modulesOf(component: string): string[] {
    return [...this.set.modules.values()]
      .filter((module) => module.value.component === component)
      .map((module) => module.value.module);
  }

  private known(
    declaration: Declaration<unknown>,
    path: Path,
    part: 'key' | 'value',
    what: string,
    name: string,
    names: Iterable<string>,
  ): boolean {
    const all = [...new Set(names)];
    if (all.includes(name)) return true;
    const meant = nearest(name, all);
    this.add(declaration, path, part, {
      kind: 'manifest-unknown-name',
      says: `There is no ${what} called ${quoted(name)}.`,
      next:
        meant !== null
          ? `write "${meant}", or declare "${name}".`
          : all.length === 0
            ? `declare "${name}", or remove this line.`
            : all.length <= 8
              ? `write ${anyOf(all)}.`
              : `name one that a manifest declares, or remove this line.`,
    });
    return false;
  }

  private add(
    declaration: Declaration<unknown>,
    path: Path,
    part: 'key' | 'value',
    problem: { kind?: FindingKind; gravity?: Gravity; says: string; next: string },
  ): void {
    // Every declaration of a loaded set is a ManifestDeclaration; the interface of the model hides only its spans.
    const own = declaration as ManifestDeclaration<{ module?: string }>;
    const { value } = own;
    this.findings.push(
      problemFinding(own.source, {
        kind: problem.kind ?? 'manifest-inconsistent',
        gravity: problem.gravity ?? 'stop',
        span: own.spanOf(path, part),
        says: problem.says,
        next: problem.next,
        ...(typeof value.module === 'string' ? { module: value.module } : {}),
      }),
    );
  }
}

/** Every convention that a contract leaves open, with its choices over all quantities. */
export function conventionsOpen(contract: Contract): Map<string, readonly string[]> {
  const open = new Map<string, readonly string[]>();
  for (const quantity of Object.values(contract.quantities)) {
    for (const [name, choices] of Object.entries(quantity.conventions ?? {})) {
      open.set(name, [...new Set([...(open.get(name) ?? []), ...choices])]);
    }
  }
  return open;
}

function listed(names: readonly string[]): string {
  return names.length === 0 ? '' : `: ${anyOf(names.slice(0, 6))}`;
}

/** Manifests and the interfaces read from source come in; every joint of the assembly and what is wrong with it go out. Pure. */
import { contractReference } from '../manifests/contract-reference.ts';
import { plug } from '../manifests/plug.ts';
import { anyOf } from '../manifests/problem.ts';
import { type Finding, sortFindings } from '../model/finding.ts';
import type { FileInterface } from '../model/interface.ts';
import type { Contract, Declaration, ManifestSet, Offer } from '../model/manifest.ts';
import { nearest } from '../model/nearest.ts';
import { findingAt, seenIn } from './finding-at.ts';
import { checkClaims } from './fit-claims.ts';
import { fitJoint } from './fit-joint.ts';
import { checkTables } from './fit-tables.ts';
import type { Joint } from './joint.ts';
import { LinkedModule } from './linked-module.ts';

export interface AssemblyFit {
  /** By expecting module in the order of the assembly, then by its expectations. */
  readonly joints: Joint[];
  /** Sorted, gravest first. */
  readonly findings: Finding[];
}

/**
 * Puts every module that is plugged in beside what it expects of the others.
 *
 * @param set  a set whose manifests were found sound; names that are not declared were reported by the loader and are passed over
 * @param interfaces  path from the root of the repository to what a reader saw; a file that a plugged module names and that
 *   is not here is a finding. Files of modules that are not plugged in are not needed.
 */
export function fitAssembly(set: ManifestSet, interfaces: ReadonlyMap<string, FileInterface>): AssemblyFit {
  const findings: Finding[] = [];
  const joints: Joint[] = [];
  const plugged = linkPlugged(set, interfaces);
  for (const module of plugged) {
    findings.push(
      ...checkSources(module),
      ...checkOffers(module),
      ...checkTables(module, set),
      ...checkClaims(module, set),
    );
    for (const [at, expectation] of (module.declaration.value.expects ?? []).entries()) {
      const contract = set.contracts.get(contractReference(expectation.contract).name);
      if (contract === undefined) continue;
      const offers = offersOf(plugged, module, contract.value.contract);
      if (offers.length === 0 && expectation.optional !== true) {
        findings.push(unmet(set, plugged, module, at, contract));
        joints.push(unmetJoint(module, at, contract));
      }
      if (offers.length > 1) findings.push(ambiguous(module, at, contract, offers));
      for (const offer of offers) {
        const fit = fitJoint({ contract, expecting: module, expects: at, offering: offer.module, offers: offer.at });
        joints.push(fit.joint);
        findings.push(...fit.findings);
      }
    }
  }
  return { joints, findings: sortFindings(findings) };
}

/**
 * The same, and the joints that arise where a case puts modules of its own into the assembly.
 * What those have in common with the assembly is said once.
 */
export function fitCases(set: ManifestSet, interfaces: ReadonlyMap<string, FileInterface>): AssemblyFit {
  const { joints, findings } = fitAssembly(set, interfaces);
  const known = new Set([...joints, ...findings].map((one) => JSON.stringify(one)));
  for (const one of set.cases.values()) {
    if (one.value.with === undefined) continue;
    const fit = fitAssembly(plug(set, one.value.with), interfaces);
    const isNew = (each: Joint | Finding) => {
      const text = JSON.stringify(each);
      return known.has(text) ? false : known.add(text);
    };
    joints.push(...fit.joints.filter(isNew));
    const evidence = seenIn(one, ['with'], `with the modules of case ${one.value.case}`, 'key');
    findings.push(
      ...fit.findings.filter(isNew).map((finding) => ({ ...finding, evidence: [...finding.evidence, evidence] })),
    );
  }
  return { joints, findings: sortFindings(findings) };
}

/** Modules plugged into the assembly, each once; every module when there is no assembly. */
function linkPlugged(set: ManifestSet, interfaces: ReadonlyMap<string, FileInterface>): LinkedModule[] {
  const names = set.assembly === null ? [...set.modules.keys()] : Object.values(set.assembly.value.plugged);
  const promotion = set.assembly?.value.build?.promote ?? {};
  return [...new Set(names)].flatMap((name) => {
    const declaration = set.modules.get(name);
    return declaration === undefined ? [] : [new LinkedModule(declaration, interfaces, promotion)];
  });
}

interface FoundOffer {
  readonly module: LinkedModule;
  readonly at: number;
}

function offersOf(plugged: readonly LinkedModule[], asking: LinkedModule, contract: string): FoundOffer[] {
  return plugged.flatMap((module) => {
    const at = (module.declaration.value.offers ?? []).findIndex(
      (offer) => contractReference(offer.contract).name === contract,
    );
    return at < 0 || module === asking ? [] : [{ module, at }];
  });
}

function unmet(
  set: ManifestSet,
  plugged: readonly LinkedModule[],
  asking: LinkedModule,
  at: number,
  contract: Declaration<Contract>,
): Finding {
  const { contract: name, component } = contract.value;
  const could = [...set.modules.values()]
    .filter(({ value }) => value.offers?.some((offer) => contractReference(offer.contract).name === name) === true)
    .map(({ value }) => value.module);
  const filled = set.assembly !== null && Object.hasOwn(set.assembly.value.plugged, component);
  const there = plugged.find((module) => module.declaration.value.component === component);
  return findingAt(asking.declaration, ['expects', at, 'contract'], {
    kind: 'joint-unmet',
    gravity: 'stop',
    module: asking.name,
    says:
      there !== undefined
        ? `${asking.name} expects ${name}, and ${there.name}, plugged into ${component}, does not offer it.`
        : `${asking.name} expects ${name}, and no module is plugged into ${component}.`,
    evidence: [
      ...(filled && set.assembly !== null
        ? [seenIn(set.assembly, ['plugged', component], `plugged into ${component}`)]
        : []),
      seenIn(contract, ['contract'], 'the contract'),
    ],
    next:
      could.length > 0
        ? `plug ${anyOf(could)} into ${component} in the assembly, or mark the expectation "optional: true" if ${asking.name} works without it.`
        : `write a module that offers ${name}, or mark the expectation "optional: true" if ${asking.name} works without it.`,
  });
}

function unmetJoint(asking: LinkedModule, at: number, contract: Declaration<Contract>): Joint {
  return {
    contract: contract.value.contract,
    contractVersion: contract.value.version,
    expecting: {
      module: asking.name,
      version: asking.declaration.value.version,
      language: asking.language,
      place: asking.declaration.placeOf(['expects', at, 'contract']),
    },
    offering: null,
    procedure: null,
    state: 'does not fit',
    rows: [],
    differs: ['nobody offers it'],
    adapter: null,
    adapted: false,
  };
}

function ambiguous(
  asking: LinkedModule,
  at: number,
  contract: Declaration<Contract>,
  offers: readonly FoundOffer[],
): Finding {
  const names = offers.map((offer) => offer.module.name);
  return findingAt(asking.declaration, ['expects', at, 'contract'], {
    kind: 'joint-ambiguous',
    gravity: 'stop',
    module: asking.name,
    says: `${names.length} modules that are plugged in offer ${contract.value.contract}: ${names.join(', ')}.`,
    evidence: offers.map((offer) =>
      seenIn(offer.module.declaration, ['offers', offer.at, 'contract'], `${offer.module.name} offers it`),
    ),
    next: 'plug in one of them, or give one of them a contract of its own.',
  });
}

/** Files, and procedures that make the interface, which the manifest names and the code does not have. */
function checkSources(module: LinkedModule): Finding[] {
  const { declaration } = module;
  const { files, procedures = [] } = declaration.value.source;
  const findings = module.missing.map((file) =>
    findingAt(declaration, ['source', 'files', files.indexOf(file)], {
      kind: 'source-missing',
      gravity: 'stop',
      module: module.name,
      says: `The source file ${file} is not there, or is a link.`,
      next: 'write the path as it stands from the root of the repository, or bring the file back.',
    }),
  );
  for (const [at, name] of procedures.entries()) {
    if (module.procedure(name) === null) findings.push(...procedureMissing(module, ['source', 'procedures', at], name));
  }
  return findings;
}

function procedureMissing(module: LinkedModule, path: readonly (string | number)[], name: string): Finding[] {
  // Of a table, and of files nobody could read, it is not known.
  if (module.files.length === 0 || module.files.every(([, read]) => read.language === 'table')) return [];
  const meant = nearest(name, module.procedureNames());
  const unread = module.files.flatMap(([file, read]) => read.incomplete.map((one) => ({ file, ...one })));
  return [
    findingAt(module.declaration, path, {
      kind: 'procedure-missing',
      gravity: module.readCompletely ? 'stop' : 'caution',
      module: module.name,
      says: `The source of ${module.name} has no procedure called "${name}".`,
      evidence: unread.slice(0, 3).map((one) => ({
        says: `not read: ${one.why}`,
        place: module.place(one.file, { line: one.line, column: 1 }),
      })),
      next:
        meant === null
          ? 'name a procedure that the files have, or add the file that holds it.'
          : `write "${meant}", or bring "${name}" back.`,
    }),
  ];
}

/** What an offer says of its procedure and arguments, against the source. */
function checkOffers(module: LinkedModule): Finding[] {
  return (module.declaration.value.offers ?? []).flatMap((offer, at) => {
    const procedures = module.declaration.value.source.procedures ?? [];
    const found = offer.procedure === undefined ? null : module.procedure(offer.procedure);
    if (offer.procedure !== undefined && found === null) {
      // Said once when it also stands under "source".
      return procedures.includes(offer.procedure)
        ? []
        : procedureMissing(module, ['offers', at, 'procedure'], offer.procedure);
    }
    if (module.files.length === 0) return [];
    return [...missingArguments(module, offer, at), ...unmappedArguments(module, offer, at)];
  });
}

function missingArguments(module: LinkedModule, offer: Offer, at: number): Finding[] {
  const found = offer.procedure === undefined ? null : module.procedure(offer.procedure);
  const named = [
    ...Object.entries(offer.arguments ?? {}).map(
      ([quantity, name]) => [['offers', at, 'arguments', quantity], name] as const,
    ),
    ...(offer.besides ?? []).map((name, index) => [['offers', at, 'besides', index], name] as const),
  ];
  return named.flatMap(([path, name]) => {
    if (module.carrier(offer, name) !== null || returnsUnnamed(module, offer, name)) return [];
    const args = found?.procedure.args.map((one) => one.name) ?? [];
    const meant = nearest(name, args);
    return [
      findingAt(module.declaration, path, {
        kind: 'argument-missing',
        gravity: module.readCompletely ? 'stop' : 'caution',
        module: module.name,
        says:
          found === null
            ? `The source of ${module.name} has nothing called "${name}".`
            : `${found.procedure.name} has no argument, result or field called "${name}".`,
        evidence:
          found === null
            ? []
            : [
                {
                  says: `${found.procedure.name}(${args.join(', ')})`,
                  place: module.place(found.file, found.procedure),
                },
              ],
        next:
          meant === null
            ? 'name what carries this quantity in the code.'
            : `write "${meant}", or bring "${name}" back.`,
      }),
    ];
  });
}

/** A result whose type no reader could look into may well have a field of that name. */
function returnsUnnamed(module: LinkedModule, offer: Offer, name: string): boolean {
  const found = offer.procedure === undefined ? null : module.procedure(offer.procedure);
  if (found === null || name.includes(' ')) return false;
  const language = module.languageOf(found.file);
  if (language === 'fortran' || language === 'table') return false;
  const { result, returns } = found.procedure;
  // Without a declared type a script may return anything.
  if (result === null) return ['typescript', 'javascript', 'python'].includes(language) && returns === undefined;
  const spelledOut = result.type.startsWith('{') || /^(number|double|float|void|int|boolean|string)$/.test(result.type);
  return returns === undefined && !spelledOut && !module.definesType(result.type);
}

/** Required arguments that the manifest is silent about: nobody would know what to pass. */
function unmappedArguments(module: LinkedModule, offer: Offer, at: number): Finding[] {
  if (offer.arguments === undefined || offer.procedure === undefined) return [];
  const found = module.procedure(offer.procedure);
  if (found === null) return [];
  const language = module.languageOf(found.file);
  const fold = (name: string) => (language === 'fortran' ? name.toLowerCase() : name).split(/[.%]/)[0]!;
  const mapped = new Set([...Object.values(offer.arguments), ...(offer.besides ?? [])].map(fold));
  return found.procedure.args
    .filter(
      (one) =>
        !one.optional &&
        one.default === undefined &&
        !one.passing?.startsWith('variadic') &&
        !mapped.has(fold(one.name)),
    )
    .map((one) =>
      findingAt(
        module.declaration,
        ['offers', at, 'arguments'],
        {
          kind: 'argument-unmapped',
          gravity: 'caution',
          module: module.name,
          says: `${found.procedure.name} takes "${one.name}", and the manifest does not say what it carries.`,
          evidence: [{ says: `${one.name}, declared ${one.type}`, place: module.place(found.file, one) }],
          next: `add it under "arguments" with its quantity, or under "besides" if it carries none.`,
        },
        'key',
      ),
    );
}

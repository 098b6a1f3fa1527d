/**
 * The gate before a campaign. Everything that the earlier stages know of one code comes in; findings, what may stand of them, and
 * the clearance go out. What touches the machine is done by the stages called; nothing is decided there.
 */
import { axisRange, datasetNamed, edgesOf } from '../fit/fit-tables.ts';
import { contractReference } from '../manifests/contract-reference.ts';
import { SAFETY_CAUTION } from '../model/caution.ts';
import { type Finding, sortFindings } from '../model/finding.ts';
import type { FileInterface } from '../model/interface.ts';
import type { Case, ManifestSet, ModuleManifest, Range } from '../model/manifest.ts';
import type { CaseOutcome } from '../runs/case-outcome.ts';
import type { ReferenceRecord } from '../runs/reference-record.ts';
import { runFindings } from '../runs/run-findings.ts';
import { type AcceptedFinding, siftFindings } from './acceptance.ts';
import { type CampaignSize, campaignDemands, campaignFindings, campaignSize, type Demand } from './campaign-size.ts';
import { caseFindings, notRunFindings } from './case-findings.ts';
import { type Clearance, type Outcome, outcomeOf } from './clearance.ts';
import { checkStates, type Visited } from './states.ts';
import { platformFindings, pluggedModules, type Validation, validationFindings, validations } from './validated.ts';

/** What was gathered about one code at one state. */
export interface Gathered {
  readonly manifests: ManifestSet;
  readonly revision: string | null;
  readonly tree: string | null;
  /** Files that differ from the revision. */
  readonly changed: readonly string[];
  /** Content id (`swh:1:cnt:…`) of a file; null when it is not there. */
  contentOf(file: string): string | null;
  /** `sha256:` digest of each declared table that is there. */
  readonly tableDigests: ReadonlyMap<string, string>;
  /** What readers saw, tables among them; without it the edges of tables are those that manifests declare. */
  readonly interfaces?: ReadonlyMap<string, FileInterface>;
  readonly outcomes: readonly CaseOutcome[];
  readonly references: readonly ReferenceRecord[];
  /** From manifests, fit, callers, constants, history and the register. */
  readonly findings: readonly Finding[];
  readonly environment: Readonly<Record<string, string>>;
  /** ISO 8601 in UTC. */
  readonly now: string;
}

export interface Audit {
  readonly outcome: Outcome;
  readonly open: readonly Finding[];
  readonly accepted: readonly AcceptedFinding[];
  readonly validations: readonly Validation[];
  readonly campaign: { readonly size: CampaignSize; readonly demands: readonly Demand[] } | null;
  readonly clearance: Clearance;
}

export function audit(gathered: Gathered): Audit {
  const { manifests, outcomes, references } = gathered;
  const validated = validations(manifests, references, gathered.contentOf);
  const measured = measuredCost(manifests, outcomes);
  const findings = [
    ...gathered.findings,
    ...treeFindings(gathered),
    ...tableFindings(gathered),
    ...caseFindings(outcomes, manifests),
    ...notRunFindings(outcomes, manifests),
    ...runFindings(outcomes, manifests),
    ...statesFindings(gathered),
    ...validationFindings(manifests, validated, outcomes),
    ...platformFindings(references, outcomes, manifests),
    ...(manifests.assembly === null ? [] : campaignFindings(manifests.assembly, measured)),
  ];
  const sifted = siftFindings(sortFindings(findings), manifests.accepted, gathered.now.slice(0, 10));
  const open = sortFindings(sifted.open);
  const outcome = outcomeOf(open);
  const campaign = manifests.assembly?.value.campaign;
  const size = campaign === undefined ? null : campaignSize(campaign, measured);
  return {
    outcome,
    open,
    accepted: sifted.accepted,
    validations: validated,
    campaign: campaign === undefined || size === null ? null : { size, demands: campaignDemands(campaign, size) },
    clearance: clearanceOf(gathered, outcome, open, sifted.accepted),
  };
}

function treeFindings({ manifests, changed, revision }: Gathered): Finding[] {
  const place = manifests.assembly?.placeOf(['assembly']) ?? { file: 'manifests/assembly.yaml', line: 1, column: 1 };
  if (revision === null) {
    return [
      {
        kind: 'tree-dirty',
        gravity: 'stop',
        place,
        says: 'This code is in no git revision, so what would run can not be named or found again.',
        evidence: [],
        next: 'put it under git and commit it.',
      },
    ];
  }
  if (changed.length === 0) return [];
  return [
    {
      kind: 'tree-dirty',
      gravity: 'stop',
      place: { file: changed[0]!, line: 1, column: 1 },
      says: `${changed.length} ${changed.length === 1 ? 'file differs' : 'files differ'} from revision ${revision.slice(0, 10)}.`,
      evidence: changed.slice(0, 20).map((file) => ({ says: file })),
      next: 'commit them or put them aside, then audit again.',
    },
  ];
}

function tableFindings({ manifests, tableDigests }: Gathered): Finding[] {
  return pluggedModules(manifests).flatMap((name) => {
    const declaration = manifests.modules.get(name);
    return (declaration?.value.tables ?? []).flatMap((table, index): Finding[] => {
      const found = tableDigests.get(table.file);
      const base = { module: name, evidence: [] };
      if (found === undefined) {
        return [
          {
            ...base,
            kind: 'table-missing',
            gravity: 'stop',
            place: declaration!.placeOf(['tables', index, 'file']),
            says: `Table ${table.file} of ${name} is not there.`,
            next: 'put it in place, or correct its path.',
          },
        ];
      }
      if (table.digest === undefined) {
        return [
          {
            ...base,
            kind: 'not-pinned',
            gravity: 'caution',
            place: declaration!.placeOf(['tables', index]),
            says: `Table ${table.file} of ${name} is declared without a digest.`,
            next: `add "digest: ${found}".`,
          },
        ];
      }
      if (table.digest === found) return [];
      return [
        {
          ...base,
          kind: 'table-altered',
          gravity: 'stop',
          place: declaration!.placeOf(['tables', index, 'digest']),
          says: `Table ${table.file} of ${name} is not the one declared.`,
          evidence: [{ says: `declared ${table.digest}` }, { says: `found    ${found}` }],
          next: 'bring back the declared table, or check the new one, renew its digest and bump the version of the module.',
        },
      ];
    });
  });
}

function statesFindings({ manifests, outcomes, interfaces }: Gathered): Finding[] {
  const visited: Visited[] = outcomes.flatMap((outcome) => {
    const theCase = manifests.cases.get(outcome.case)?.value;
    if (theCase === undefined || outcome.footprint === null || outcome.produced === null) return [];
    const modules = new Set(Object.values(outcome.produced.modules).map((one) => one.module));
    return [{ by: `case ${outcome.case}`, modules, states: statesOf(theCase, outcome.footprint) }];
  });
  const campaign = manifests.assembly?.value.campaign?.domain;
  if (campaign !== undefined) {
    const states = Object.entries(campaign).flatMap(([quantity, range]) => {
      const unit = contractUnit(manifests, quantity);
      return unit === null ? [] : [[quantity, { range, unit }] as const];
    });
    visited.push({
      by: 'the campaign',
      modules: new Set(pluggedModules(manifests)),
      states: Object.fromEntries(states),
    });
  }
  return checkStates(
    [...manifests.modules.values()],
    visited,
    (module, offer, quantity) => offerUnit(manifests, module, offer, quantity),
    (file, name, axis) => {
      const dataset = datasetNamed(interfaces?.get(file), name);
      return edgesOf(axis, dataset === null ? null : axisRange(dataset, axis));
    },
  );
}

/** The footprint with the units of the outputs that it was read from. */
function statesOf(theCase: Case, footprint: Readonly<Record<string, Range>>): Visited['states'] {
  return Object.fromEntries(
    Object.entries(footprint).flatMap(([quantity, range]) => {
      const output = theCase.footprint?.[quantity] ?? quantity;
      const unit = theCase.outputs.map((one) => one.quantities[output]?.unit).find((one) => one !== undefined);
      return unit === undefined ? [] : [[quantity, { range, unit }]];
    }),
  );
}

/** The unit that contracts give a quantity; null when none has it or they differ. */
function contractUnit(manifests: ManifestSet, quantity: string): string | null {
  const units = new Set([...manifests.contracts.values()].flatMap((one) => one.value.quantities[quantity]?.unit ?? []));
  return units.size === 1 ? [...units][0]! : null;
}

function offerUnit(manifests: ManifestSet, module: ModuleManifest, index: number, quantity: string): string | null {
  const offer = module.offers?.[index];
  if (offer === undefined) return null;
  const contract = manifests.contracts.get(contractReference(offer.contract).name)?.value;
  return offer.units?.[quantity] ?? contract?.quantities[quantity]?.unit ?? null;
}

/** Core-seconds of the run that the campaign's cost is measured by: cases run on one core. */
function measuredCost(manifests: ManifestSet, outcomes: readonly CaseOutcome[]): { coreSeconds: number } | undefined {
  const by = manifests.assembly?.value.campaign?.cost?.['measured-by'];
  const seconds = outcomes.find((outcome) => outcome.case === by)?.seconds;
  return seconds == null ? undefined : { coreSeconds: seconds };
}

function clearanceOf(
  gathered: Gathered,
  outcome: Outcome,
  open: readonly Finding[],
  accepted: readonly AcceptedFinding[],
): Clearance {
  const { manifests, outcomes, contentOf } = gathered;
  const assembly = manifests.assembly?.value;
  return {
    format: 'mortise clearance 1',
    assembly: assembly?.assembly ?? '',
    outcome,
    made: gathered.now,
    revision: gathered.revision,
    tree: gathered.tree,
    changed: gathered.changed,
    modules: Object.entries(assembly?.plugged ?? {}).flatMap(([component, name]) => {
      const declaration = manifests.modules.get(name);
      if (declaration === undefined) return [];
      const { version, source, tables } = declaration.value;
      const files = [...source.files, ...(tables ?? []).map((table) => table.file), declaration.file];
      const ids = files.map((file) => [file, contentOf(file) ?? 'missing'] as const);
      return [{ component, module: name, version, files: Object.fromEntries(ids) }];
    }),
    cases: outcomes.map((one) => ({ case: one.case, class: one.class ?? one.state, tolerances: worstTolerances(one) })),
    findings: open.map(({ kind, gravity, module, says }) => ({
      kind,
      gravity,
      ...(module === undefined ? {} : { module }),
      says,
    })),
    accepted: accepted.map(({ finding, acceptance: { reason, by, until } }) => ({
      kind: finding.kind,
      says: finding.says,
      reason,
      ...(by === undefined ? {} : { by }),
      ...(until === undefined ? {} : { until }),
    })),
    environment: gathered.environment,
    ...(assembly?.consequence === 'safety-related' ? { caution: SAFETY_CAUTION } : {}),
  };
}

/** Largest deviation of a case in tolerances; null when something is not comparable or nothing was compared. */
function worstTolerances(outcome: CaseOutcome): number | null {
  if (
    outcome.deviations.length === 0 ||
    outcome.deviations.some((one) => one.tolerances === null && one.class === 'not comparable')
  )
    return null;
  const worst = Math.max(...outcome.deviations.map((one) => one.tolerances ?? 0));
  return Number.isFinite(worst) ? worst : null;
}

/** The report of an audit: what was found about a code, ready for every form. Nothing is computed here, only laid out. */
import type { Audit } from '../audit/audit.ts';
import { bytesText, type Demand } from '../audit/campaign-size.ts';
import type { GatheredCode } from '../audit/gather.ts';
import { SAFETY_CAUTION } from '../model/caution.ts';
import type { CaseOutcome } from '../runs/case-outcome.ts';
import { isBad } from '../runs/case-outcome.ts';
import type { Cell, Report, Section } from './report.ts';

export function auditReport(gathered: GatheredCode, audit: Audit): Report {
  const assembly = gathered.manifests.assembly?.value;
  const name = assembly?.assembly ?? 'this code';
  return {
    title: `Audit of ${name}`,
    command: 'audit',
    made: gathered.now,
    facts: [
      { name: 'revision', value: gathered.revision ?? 'none: not under git' },
      { name: 'work tree', value: gathered.changed.length === 0 ? 'clean' : `${gathered.changed.length} files differ` },
      ...Object.entries(gathered.environment).map(([fact, value]) => ({ name: fact, value })),
    ],
    outcome: audit.outcome,
    sections: [
      modulesSection(gathered, audit),
      jointsSection(gathered),
      casesSection(gathered),
      ...campaignSection(audit),
    ],
    findings: audit.open,
    accepted: audit.accepted,
    deviations: gathered.outcomes.flatMap((one) => one.deviations),
    drawings: [
      {
        draw: 'joints',
        title: 'Joints of the assembly',
        modules: Object.entries(assembly?.plugged ?? {}).map(([component, module]) => ({ component, module })),
        joints: gathered.joints.flatMap((one) =>
          one.offering === null
            ? []
            : [{ from: one.expecting.module, to: one.offering.module, contract: one.contract, state: one.state }],
        ),
      },
    ],
    caution: assembly?.consequence === 'safety-related' ? SAFETY_CAUTION : null,
  };
}

function modulesSection({ manifests, joints }: GatheredCode, audit: Audit): Section {
  return {
    title: 'Modules',
    head: ['component', 'module', 'version', 'validated', 'joints'],
    rows: Object.entries(manifests.assembly?.value.plugged ?? {}).map(([component, module]): Cell[] => {
      const validation = audit.validations.find((one) => one.module === module);
      const own = joints.filter((one) => one.expecting.module === module || one.offering?.module === module);
      const unfit = own.filter((one) => one.state === 'does not fit').length;
      const adapted = own.filter((one) => one.state === 'fits through an adapter').length;
      return [
        component,
        module,
        manifests.modules.get(module)?.value.version ?? '?',
        validatedText(validation?.date ?? null, validation?.changed.length ?? 0),
        unfit > 0
          ? { text: `${unfit} of ${own.length} unfit`, mood: 'alarm' }
          : adapted > 0
            ? { text: `${adapted} of ${own.length} adapted`, mood: 'warm' }
            : own.length === 0
              ? 'none'
              : `${own.length} fit`,
      ];
    }),
  };
}

export function validatedText(date: string | null, changed: number): string {
  if (date === null) return 'never';
  return changed === 0 ? date.slice(0, 10) : `${date.slice(0, 10)}, older`;
}

function jointsSection({ joints }: GatheredCode): Section {
  return {
    title: 'Joints',
    head: ['expects', 'contract', 'offers', 'state'],
    rows: joints.map((one): Cell[] => [
      one.expecting.module,
      `${one.contract} ${one.contractVersion}`,
      one.offering?.module ?? 'nobody',
      one.state === 'fits' ? one.state : { text: one.state, mood: one.state === 'does not fit' ? 'alarm' : 'warm' },
    ]),
  };
}

function casesSection({ outcomes }: GatheredCode): Section {
  return {
    title: 'Cases',
    head: ['case', 'result', 'worst quantity', 'tolerances used', 'seconds'],
    rows: outcomes.map((one): Cell[] => {
      const worst = [...one.deviations].sort(
        (a, b) => (b.tolerances ?? Number.POSITIVE_INFINITY) - (a.tolerances ?? Number.POSITIVE_INFINITY),
      )[0];
      const result = one.class ?? one.state;
      return [
        one.case,
        isBad(one) ? { text: result, mood: 'alarm' } : result,
        worst === undefined || one.class === 'bit-for-bit' ? '' : worst.quantity,
        worst?.tolerances == null || one.class === 'bit-for-bit' ? '' : shortTolerances(worst.tolerances),
        secondsText(one),
      ];
    }),
  };
}

function shortTolerances(tolerances: number): string {
  return tolerances >= 100 ? tolerances.toExponential(1) : String(Number(tolerances.toPrecision(2)));
}

function secondsText(outcome: CaseOutcome): string {
  if (outcome.seconds === null) return '';
  return `${outcome.seconds.toFixed(2)}${outcome.kept ? ' (kept)' : ''}`;
}

function campaignSection({ campaign }: Audit): Section[] {
  if (campaign === null) return [];
  return [
    {
      title: 'Campaign',
      head: ['', 'asks', 'granted', ''],
      rows: campaign.demands.map((one): Cell[] => [
        one.what,
        demandText(one.what, one.asks),
        demandText(one.what, one.has),
        one.over ? { text: 'over', mood: 'alarm' } : one.asks === null || one.has === null ? 'not known' : 'within',
      ]),
    },
  ];
}

export function demandText(what: Demand['what'], amount: number | null): string {
  if (amount === null) return 'not known';
  return what === 'core-hours' ? Number(amount.toPrecision(3)).toLocaleString('en-US') : bytesText(amount);
}

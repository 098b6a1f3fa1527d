/** What a campaign declares comes in; the memory, storage and core-hours that it asks for go out, against what was granted. Pure. */
import type { Evidence, Finding } from '../model/finding.ts';
import type { Assembly, Campaign, Declaration } from '../model/manifest.ts';

export interface CampaignSize {
  readonly zones: number;
  /** Values of one zone: fields, and those by species, energy bin and direction. */
  readonly valuesPerZone: number;
  /** One copy of the state. */
  readonly stateBytes: number;
  /** All copies that the scheme holds at once. */
  readonly memoryBytes: number;
  /** Outputs over the whole run; 0 when the campaign writes none. */
  readonly outputs: number;
  readonly storageBytes: number;
  /** null when no cost is known. */
  readonly coreHours: number | null;
}

export interface MeasuredCost {
  /** Wall-clock time of the measuring run times the cores it used. */
  readonly coreSeconds: number;
}

/** One thing asked for against what was granted. */
export interface Demand {
  readonly what: 'memory' | 'storage' | 'core-hours';
  /** In bytes or core-hours; null when not known. */
  readonly asks: number | null;
  /** null when the allocation does not say. */
  readonly has: number | null;
  readonly over: boolean;
}

/**
 * Size of a campaign.
 * A zone holds `fields` values and `species * energy-bins * directions` more when any of the three is given; a campaign
 * that gives none of all these holds one value a zone.
 *
 * @param measured  core-seconds of the case that `cost.measured-by` names; used with its declared zones and steps
 * @returns bytes as numbers (exact below 2^53), core-hours as a number or null when no cost is known
 * @source common practice: 1000^3 zones x 20 energy bins x 100 directions x 4 species x 8 bytes = 6.4e13 bytes (64 TB)
 */
export function campaignSize(campaign: Campaign, measured?: MeasuredCost): CampaignSize {
  const zones = campaign.grid.reduce((product, along) => product * along, 1);
  const resolved = [campaign.species, campaign['energy-bins'], campaign.directions];
  const phaseSpace = resolved.every((one) => one === undefined)
    ? 0
    : resolved.reduce<number>((product, one) => product * (one ?? 1), 1);
  const valuesPerZone = phaseSpace + (campaign.fields ?? (phaseSpace === 0 ? 1 : 0));
  const stateBytes = zones * valuesPerZone * (campaign['bytes-per-value'] ?? 8);
  const every = campaign['output-every'];
  // The first state is written too.
  const outputs = every === undefined ? 0 : Math.floor(campaign.steps / every) + 1;
  const cost = costPerZoneStep(campaign, measured);
  return {
    zones,
    valuesPerZone,
    stateBytes,
    memoryBytes: stateBytes * (campaign.copies ?? 1),
    outputs,
    storageBytes: outputs * stateBytes,
    coreHours: cost === null ? null : (zones * campaign.steps * cost) / 3600,
  };
}

/** Core-seconds of one zone and one step: as declared, or from the measured run over its zones and steps. */
export function costPerZoneStep(campaign: Campaign, measured?: MeasuredCost): number | null {
  const { cost } = campaign;
  const declared = cost?.['core-seconds-per-zone-step'];
  if (measured !== undefined && cost?.zones !== undefined && cost.steps !== undefined) {
    return measured.coreSeconds / (cost.zones * cost.steps);
  }
  return declared ?? null;
}

/** What is asked for against what was granted, in the order memory, storage, core-hours. */
export function campaignDemands(campaign: Campaign, size: CampaignSize): Demand[] {
  const { allocation } = campaign;
  const demand = (what: Demand['what'], asks: number | null, has: number | undefined): Demand => ({
    what,
    asks,
    has: has ?? null,
    over: asks !== null && has !== undefined && asks > has,
  });
  return [
    demand('memory', size.memoryBytes, allocation?.['memory-bytes']),
    demand('storage', size.storageBytes, allocation?.['storage-bytes']),
    demand('core-hours', size.coreHours, allocation?.['core-hours']),
  ];
}

/** A finding for everything that goes beyond the allocation, and for an allocation that nothing can be held against. */
export function campaignFindings(assembly: Declaration<Assembly>, measured?: MeasuredCost): Finding[] {
  const { campaign } = assembly.value;
  if (campaign === undefined) return [];
  const size = campaignSize(campaign, measured);
  const findings: Finding[] = campaignDemands(campaign, size)
    .filter((demand) => demand.over)
    .map((demand) => {
      const path = ['campaign', 'allocation', KEY[demand.what]];
      const [asks, has] = [amountText(demand.what, demand.asks!), amountText(demand.what, demand.has!)];
      return {
        kind: 'campaign-over-allocation',
        gravity: 'stop',
        place: assembly.placeOf(path),
        says: `The campaign asks for ${asks}${demand.what === 'core-hours' ? '' : ` of ${demand.what}`}; ${has} were granted.`,
        evidence: [
          { says: 'the line meant', excerpt: assembly.excerptOf(path) },
          ...reckoning(campaign, size, demand.what),
        ],
        next: NEXT[demand.what],
      };
    });
  if (campaign.allocation?.['core-hours'] !== undefined && size.coreHours === null) {
    const path = ['campaign', 'allocation', 'core-hours'];
    const by = campaign.cost?.['measured-by'];
    findings.push({
      kind: 'campaign-cost-unknown',
      gravity: 'caution',
      place: assembly.placeOf(path),
      says: 'Core-hours were granted, and the cost of a zone and a step is not known.',
      evidence: [{ says: 'the line meant', excerpt: assembly.excerptOf(path) }],
      next:
        by === undefined
          ? 'add "cost:" with core-seconds-per-zone-step, or with measured-by, zones and steps of a case.'
          : `add the zones and steps of the case ${by} under "cost", and run it: mortise rerun ${by}.`,
    });
  }
  return findings;
}

const KEY = { memory: 'memory-bytes', storage: 'storage-bytes', 'core-hours': 'core-hours' } as const;

const NEXT = {
  memory: 'take a coarser grid, fewer bins or directions, fewer copies of the state, or more nodes.',
  storage: 'write less often, write fewer fields, or ask for more storage.',
  'core-hours': 'take a coarser grid or fewer steps, make a zone and a step cheaper, or ask for more core-hours.',
} as const;

/** How a figure comes about, so that it can be checked by hand. */
function reckoning(campaign: Campaign, size: CampaignSize, what: Demand['what']): Evidence[] {
  const bytes = campaign['bytes-per-value'] ?? 8;
  const state = `${campaign.grid.join(' x ')} zones x ${size.valuesPerZone} values x ${bytes} bytes = ${bytesText(size.stateBytes)}`;
  if (what === 'memory') return [{ says: `${state}, times ${campaign.copies ?? 1} copies` }];
  if (what === 'storage') return [{ says: `${state}, times ${size.outputs} outputs` }];
  const perZone = (size.coreHours! * 3600) / (size.zones * campaign.steps);
  return [
    {
      says: `${campaign.grid.join(' x ')} zones x ${campaign.steps} steps x ${perZone.toPrecision(3)} core-seconds / 3600`,
    },
  ];
}

function amountText(what: Demand['what'], amount: number): string {
  return what === 'core-hours' ? `${countText(amount)} core-hours` : bytesText(amount);
}

/** Decimal units (IEC 80000-13: 1 TB is 1e12 bytes), three digits. */
export function bytesText(bytes: number): string {
  const units = ['bytes', 'kB', 'MB', 'GB', 'TB', 'PB', 'EB', 'ZB', 'YB'];
  const power = bytes < 1000 ? 0 : Math.min(units.length - 1, Math.floor(Math.log10(bytes) / 3 + 1e-12));
  return `${Number((bytes / 1000 ** power).toPrecision(3))} ${units[power]}`;
}

function countText(count: number): string {
  return count >= 1e6
    ? `${Number((count / 1e6).toPrecision(3))} million`
    : Number(count.toPrecision(3)).toLocaleString('en-US');
}

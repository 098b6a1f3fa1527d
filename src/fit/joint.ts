/** Where one module's *expects* meets another's *offers*: fit makes it; the terminal UI, reports and the audit show it. Plain data. */
import type { Intent, Language } from '../model/interface.ts';
import type { Range } from '../model/manifest.ts';
import type { Place } from '../model/place.ts';

export const JOINT_STATES = ['fits', 'fits through an adapter', 'does not fit'] as const;
/** From best to worst. */
export type JointState = (typeof JOINT_STATES)[number];

export interface Joint {
  readonly contract: string;
  readonly contractVersion: string;
  readonly expecting: JointSide;
  /** null when no module that is plugged in offers the contract. */
  readonly offering: JointSide | null;
  /** The procedure that the offering side names. */
  readonly procedure: string | null;
  readonly state: JointState;
  /** In the contract's order. */
  readonly rows: readonly JointRow[];
  /** What stands between this joint and a fit besides its rows: the range of versions, the number of arguments. */
  readonly differs: readonly string[];
  /** What brings the two sides together; null when nothing is needed or nothing can. */
  readonly adapter: Adapter | null;
  /** True when the expecting side names the file that already converts. */
  readonly adapted: boolean;
}

export interface JointSide {
  readonly module: string;
  readonly version: string;
  readonly language: Language;
  /** The expectation or the offer in its manifest. */
  readonly place: Place;
}

export interface JointRow {
  readonly quantity: string;
  readonly state: JointState;
  /** One sentence each. */
  readonly differs: readonly string[];
  readonly expecting: Half;
  readonly offering: Half;
}

/** One quantity as one side has it. */
export interface Half {
  readonly unit: string;
  /** `scalar`, or the extents by name: `zones, species`. */
  readonly shape: string;
  readonly intent: Intent;
  /** In the unit of this half; null when nothing is declared. */
  readonly domain: Range | null;
  readonly conventions: Readonly<Record<string, string>>;
  /** What carries it in the code, as far as that was read. */
  readonly carrier: Carrier | null;
}

export interface Carrier {
  readonly how: 'argument' | 'result' | 'field' | 'common' | 'variable' | 'constant' | 'dataset';
  readonly name: string;
  /** The procedure, type or COMMON block that it belongs to. */
  readonly owner: string | null;
  /** From 1, for an argument. */
  readonly position: number | null;
  readonly type: string;
  /** After the promotion that the build declares; null where not known. */
  readonly bytes: number | null;
  readonly rank: number | null;
  readonly intent: Intent | null;
  readonly place: Place | null;
}

/** How to pass what the expecting side has to the procedure of the offering side. */
export interface Adapter {
  readonly contract: string;
  readonly contractVersion: string;
  readonly expecting: string;
  readonly offering: string;
  /** The procedure that the adapter calls, and the module or class that holds it. */
  readonly procedure: string;
  readonly parent: string | null;
  /** Where that procedure stands, from the root of the repository. */
  readonly file: string | null;
  /** Language of the expecting side, in which the adapter is written. */
  readonly language: Language;
  /** In the order of the contract. */
  readonly steps: readonly AdapterStep[];
  /** Arguments of the procedure that carry no quantity, passed on as they come. */
  readonly besides: readonly { readonly name: string; readonly position: number; readonly type: string }[];
}

/** One quantity on its way: offered = factor * expected + offset, and back again for what comes out. */
export interface AdapterStep {
  readonly quantity: string;
  readonly intent: Intent;
  readonly rank: number;
  readonly bytes: number | null;
  /** Place among the arguments as the expecting side passes them, from 1. */
  readonly expectedPosition: number;
  /** Place among the arguments of the procedure, from 1; null when it comes back as a result. */
  readonly offeredPosition: number | null;
  /** Name of the argument, result or field on the offering side. */
  readonly name: string;
  readonly factor: number;
  readonly offset: number;
  readonly expectedUnit: string;
  readonly offeredUnit: string;
  /** Why it is not handed over as it is; empty when it is. */
  readonly why: string;
}

/** The worse of two states. */
export function worseState(a: JointState, b: JointState): JointState {
  return JOINT_STATES.indexOf(a) >= JOINT_STATES.indexOf(b) ? a : b;
}

/** What the screens show, as plain data: made from an audit, a register and a running job by view-models.ts, drawn by the screen files. */
import type { Deviation, DeviationClass, Profile } from '../model/deviation.ts';
import type { Finding } from '../model/finding.ts';

export type Outcome = 'cleared' | 'cleared with cautions' | 'held';

export interface Views {
  readonly assembly: AssemblyView;
  readonly joints: readonly JointView[];
  readonly histories: readonly HistoryView[];
  readonly cases: readonly CaseView[];
  readonly deviations: readonly DeviationView[];
  readonly swap: SwapView | null;
  readonly register: RegisterView | null;
  readonly findings: readonly FindingView[];
}

export interface AssemblyView {
  readonly title: string;
  readonly revision: string;
  /** Files that differ from the revision. */
  readonly changed: readonly string[];
  /** null while nothing was audited yet. */
  readonly outcome: Outcome | null;
  /** Cases without a result, where nothing else holds it: the answer is open then. */
  readonly open: number;
  /** Why it is held, or what to know, gravest first. */
  readonly why: readonly string[];
  readonly parts: readonly PartView[];
  readonly campaign: CampaignView | null;
  readonly notices: readonly string[];
  /** Shown on every screen of a safety-related assembly. */
  readonly caution: string | null;
  /** When this was known, where it is what an earlier look found and is being read again; null when it is fresh. */
  readonly asOf: string | null;
  /** A job in progress: what it does and how far it is, 0 to 1. */
  readonly job: { readonly says: string; readonly done: number } | null;
}

export interface PartView {
  readonly component: string;
  readonly module: string;
  readonly version: string;
  readonly age: string;
  readonly validated: string;
  readonly joints: { readonly fits: number; readonly adapter: number; readonly unfit: number };
  readonly undeclared: number;
  /** Why it can't run here; null when it can. */
  readonly notRunnable: string | null;
}

export interface CampaignView {
  readonly rows: readonly {
    readonly name: string;
    readonly asks: string;
    readonly has: string;
    readonly over: boolean;
  }[];
}

export type Seam = 'fits' | 'adapter' | 'unfit';

export interface JointView {
  readonly contract: string;
  readonly expecting: { readonly module: string; readonly version: string };
  readonly offering: { readonly module: string; readonly version: string };
  readonly seam: Seam;
  readonly rows: readonly JointRow[];
  /** Source text of the adapter, and the file name proposed for it. */
  readonly adapter: { readonly file: string; readonly text: string } | null;
}

export interface JointRow {
  readonly quantity: string;
  readonly left: HalfRow;
  readonly right: HalfRow;
  readonly seam: Seam;
  /** What differs, or the factor that mends it. */
  readonly says: string;
  readonly footprint: readonly [number, number] | null;
}

export interface HalfRow {
  readonly unit: string;
  readonly intent: string;
  /** Argument position from 1 and its name, type and kind, as far as known. */
  readonly argument: string;
  readonly conventions: string;
  readonly domain: readonly [number | null, number | null] | null;
}

export interface HistoryView {
  readonly module: string;
  readonly steps: readonly StepView[];
  readonly lineage: readonly string[];
}

export interface StepView {
  readonly commit: string;
  readonly date: string;
  readonly author: string;
  readonly subject: string;
  readonly version: string | null;
  readonly asked: string;
  readonly declared: string;
  readonly undeclared: boolean;
  readonly changes: readonly { readonly says: string; readonly before: string; readonly after: string }[];
}

export interface CaseView {
  readonly name: string;
  readonly title: string;
  readonly state: string;
  readonly seconds: number | null;
  readonly expectedSeconds: number | null;
  readonly worst: DeviationClass | null;
  readonly why: string;
  readonly quantities: readonly {
    readonly name: string;
    readonly of: Deviation['of'];
    readonly class: DeviationClass;
    readonly tolerances: number | null;
    readonly says: string;
  }[];
}

export interface DeviationView extends Omit<Deviation, 'profile' | 'why'> {
  readonly profile: Profile | null;
  readonly why: string;
}

export interface SwapView {
  readonly cases: readonly string[];
  /** Exchanges that were run, and single ones that could be. */
  readonly rows: readonly SwapRow[];
}

export interface SwapRow {
  /** As on the command line, several with a blank between. */
  readonly exchange: string;
  /** In the order of the cases. */
  readonly cells: readonly SwapCell[];
  /** What each exchange of several does, and what they do together. */
  readonly effects: readonly string[];
}

export interface SwapCell {
  /** Null when it was not run, or has no result. */
  readonly class: DeviationClass | null;
  readonly tolerances: number | null;
  /** Why there is no result; empty when there is, or when it was not run. */
  readonly why: string;
  readonly deviations: readonly DeviationView[];
}

export interface RegisterView {
  readonly total: number;
  /** Entries that match, best first; asked again at every letter typed. */
  find(text: string, from: number, count: number): readonly RegisterRow[];
  count(text: string): number;
  entry(id: string): readonly string[];
  readonly notices: readonly string[];
}

export interface RegisterRow {
  readonly id: string;
  readonly date: string;
  readonly result: string;
  readonly standing: string;
}

export interface FindingView {
  readonly finding: Finding;
  readonly accepted: string | null;
}

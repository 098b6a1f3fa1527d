/** One model of what a command has to report. Every form, text, JSON, Markdown, HTML, SARIF, JUnit, is written from it; none computes anything. */
import type { AcceptedFinding } from '../audit/acceptance.ts';
import type { Outcome } from '../audit/clearance.ts';
import type { Deviation } from '../model/deviation.ts';
import type { Finding } from '../model/finding.ts';

export interface Report {
  /** `Audit of cloud-shock`. */
  readonly title: string;
  /** The command that made it, e.g. `audit`. */
  readonly command: string;
  /** ISO 8601 in UTC. */
  readonly made: string;
  readonly facts: readonly Fact[];
  readonly outcome?: Outcome;
  readonly sections: readonly Section[];
  /** Sorted; those that count. */
  readonly findings: readonly Finding[];
  readonly accepted: readonly AcceptedFinding[];
  readonly deviations: readonly Deviation[];
  /** Joints, histories and maps to draw, where the form can draw. */
  readonly drawings?: readonly Drawing[];
  /** The caution of a safety-related assembly. */
  readonly caution: string | null;
}

export interface Fact {
  readonly name: string;
  readonly value: string;
}

/** A titled table; `lines` stand below it. */
export interface Section {
  readonly title: string;
  readonly head: readonly string[];
  readonly rows: readonly (readonly Cell[])[];
  readonly lines?: readonly string[];
}

/** Text, or text that stands out because it is good or bad news. */
export type Cell = string | { readonly text: string; readonly mood: 'good' | 'warm' | 'alarm' };

export function cellText(cell: Cell): string {
  return typeof cell === 'string' ? cell : cell.text;
}

export type Drawing =
  | {
      readonly draw: 'joints';
      readonly title: string;
      readonly modules: readonly { readonly module: string; readonly component: string }[];
      readonly joints: readonly {
        readonly from: string;
        readonly to: string;
        readonly contract: string;
        readonly state: 'fits' | 'fits through an adapter' | 'does not fit';
      }[];
    }
  | {
      readonly draw: 'versions';
      readonly title: string;
      readonly steps: readonly {
        readonly date: string;
        readonly version: string | null;
        readonly asked: string;
        readonly declared: string;
        readonly undeclared: boolean;
        readonly says: string;
      }[];
    };

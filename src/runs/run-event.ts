/** What happens while cases run, as it happens: for progress on a terminal. */
import type { DeviationClass } from '../model/deviation.ts';
import type { CaseState } from './case-outcome.ts';

export type RunEvent =
  | {
      readonly what: 'planned';
      /** Seconds from earlier runs; null for a case that never ran. */
      readonly cases: readonly { readonly case: string; readonly expectedSeconds: number | null }[];
      /** Runs at the same time. */
      readonly atOnce: number;
    }
  | { readonly what: 'building'; readonly build: string; readonly expectedSeconds: number | null }
  | { readonly what: 'built'; readonly build: string; readonly seconds: number; readonly well: boolean }
  | { readonly what: 'started'; readonly case: string; readonly expectedSeconds: number | null }
  | { readonly what: 'ran'; readonly case: string; readonly seconds: number; readonly kept: boolean }
  | {
      readonly what: 'finished';
      readonly case: string;
      readonly state: CaseState;
      readonly class: DeviationClass | null;
      /** Cases finished so far, this one included, of all. */
      readonly done: number;
      readonly of: number;
    };

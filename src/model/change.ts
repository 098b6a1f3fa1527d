/** One thing that differs between two states of a module. History makes it; review, audit, report and screens show it. */
import type { ChangeKind } from './bump.ts';
import type { Place } from './place.ts';

export interface Change {
  readonly kind: ChangeKind;
  /** Procedure, COMMON block, type, constant, quantity or table that changed. */
  readonly subject: string;
  /** One sentence: `argument rho of eos moved from 1st to 2nd place`. */
  readonly says: string;
  readonly before?: Side;
  readonly after?: Side;
}

export interface Side {
  /** What stood there, in a few words: `real*4, rank 1`. */
  readonly text: string;
  readonly place?: Place;
}

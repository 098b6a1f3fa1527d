/** What one commit did to one module. History makes it; reports, review and screens show it. */
import type { Bump } from '../model/bump.ts';
import type { Change } from '../model/change.ts';
import type { Place } from '../model/place.ts';
import type { CommitRecord } from './commit-record.ts';

export interface ModuleStep {
  readonly module: string;
  readonly component: string | null;
  readonly commit: Omit<CommitRecord, 'files'>;
  /** The module came into being or went with this commit; then nothing was there to drift from. */
  readonly event: 'born' | 'gone' | 'moved' | null;
  /** Path before, for a move. */
  readonly movedFrom?: string;
  readonly changes: readonly Change[];
  /** The least bump that the policy asks for. */
  readonly asked: Bump;
  /** The version before, and the one that first went out with this step; null where none is declared. */
  readonly versionBefore: string | null;
  readonly versionAfter: string | null;
  readonly declared: Bump;
  /** What declared it: `manifest`, `tag v1.2`, the path of a version file; null when nothing declares versions here. */
  readonly declaredBy: string | null;
  /** `declared`; `undeclared`: a release went out, or the manifest stayed, without saying so; `open`: not released yet. */
  readonly state: 'declared' | 'undeclared' | 'open';
  /** Calls in files that this commit did not touch, and that no longer fit or must be looked at. */
  readonly callers: readonly Place[];
}

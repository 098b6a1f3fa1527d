/** An outcome that someone vouches for becomes the reference of its case. */
import type { Case } from '../model/manifest.ts';
import type { CaseOutcome } from './case-outcome.ts';
import { referenceFolder, writeReference } from './reference-files.edge.ts';
import type { ReferenceRecord } from './reference-record.ts';

export interface Recording {
  /** Absolute path of the code. */
  readonly root: string;
  readonly manifestFolder?: string;
  readonly case: Case;
  readonly outcome: CaseOutcome;
  /** Why this result may be trusted. */
  readonly reason: string;
  readonly who: string;
  /** True to record from a work tree with changes, which no one can fetch again. */
  readonly evenChanged?: boolean;
  /** For tests; now when absent. */
  readonly date?: Date;
}

/** A reference that must not be recorded; the message says why and what to do. */
export class NotRecorded extends Error {
  override readonly name = 'NotRecorded';
}

/**
 * Records a reference: output files, and what produced them.
 *
 * @throws {NotRecorded} when there is no result, no reason, or the tree has changes and `evenChanged` is not set
 */
export async function recordReference(recording: Recording): Promise<ReferenceRecord> {
  const { outcome, reason } = recording;
  const name = recording.case.case;
  if (reason.trim() === '') throw new NotRecorded('a reference needs a reason: add --reason TEXT');
  if (outcome.result === null || outcome.produced === null || outcome.state === 'failed') {
    throw new NotRecorded(`${name} has no result to record: ${outcome.why}`);
  }
  const folder = recording.manifestFolder ?? 'manifests';
  const changed = outcome.produced.changed.filter((file) => !file.startsWith(`${folder}/references/`));
  if (changed.length > 0 && recording.evenChanged !== true) {
    const some = changed.slice(0, 5).join(', ') + (changed.length > 5 ? ` and ${changed.length - 5} more` : '');
    throw new NotRecorded(
      `the tree differs from its commit in ${some}; commit first, or add --even-changed to record what no revision holds`,
    );
  }
  return writeReference(
    referenceFolder(recording.root, name, folder),
    {
      case: name,
      date: (recording.date ?? new Date()).toISOString(),
      who: recording.who,
      reason: reason.trim(),
      ...outcome.produced,
      changed,
      footprint: outcome.footprint ?? {},
      seconds: outcome.seconds ?? 0,
    },
    outcome.result,
    recording.case.outputs.map((output) => output.file),
  );
}

/** Today's modules against those that made the references: what changed since a result was last validated, and on what machine. */
import type { Finding } from '../model/finding.ts';
import type { ManifestSet } from '../model/manifest.ts';
import type { CaseOutcome, Produced } from '../runs/case-outcome.ts';
import type { ReferenceRecord } from '../runs/reference-record.ts';

/** How one module stands to the references that it took part in. */
export interface Validation {
  readonly module: string;
  /** The newest reference that it took part in; null when there is none. */
  readonly case: string | null;
  readonly date: string | null;
  readonly revision: string | null;
  /** Files that are not what they were then. */
  readonly changed: readonly string[];
}

/**
 * @param records    the reference of each case that has one
 * @param contentOf  content id (`swh:1:cnt:…`) of a file today; null when it is not there
 */
export function validations(
  manifests: ManifestSet,
  records: readonly ReferenceRecord[],
  contentOf: (file: string) => string | null,
): Validation[] {
  const newest = [...records].sort((a, b) => (a.date < b.date ? 1 : -1));
  return pluggedModules(manifests).map((module) => {
    const record = newest.find((one) => Object.values(one.modules).some((produced) => produced.module === module));
    if (record === undefined) return { module, case: null, date: null, revision: null, changed: [] };
    const produced = Object.values(record.modules).find((one) => one.module === module)!;
    const changed = Object.entries(produced.files)
      .filter(([file, id]) => contentOf(file) !== id)
      .map(([file]) => file);
    return { module, case: record.case, date: record.date, revision: record.revision, changed };
  });
}

export function pluggedModules(manifests: ManifestSet): string[] {
  return [...new Set(Object.values(manifests.assembly?.value.plugged ?? {}))];
}

/** A caution for a module in no reference; a note for one that changed since, as the rerun of the case already weighs the change. */
export function validationFindings(
  manifests: ManifestSet,
  all: readonly Validation[],
  outcomes: readonly CaseOutcome[],
): Finding[] {
  return all.flatMap((one): Finding[] => {
    const declaration = manifests.modules.get(one.module);
    const place = declaration?.placeOf(['module']) ?? {
      file: `manifests/modules/${one.module}.yaml`,
      line: 1,
      column: 1,
    };
    if (one.case === null) {
      const exercised = outcomes.some((outcome) =>
        outcome.state === 'no reference' || outcome.state === 'not runnable'
          ? usesModule(outcome.produced, one.module)
          : false,
      );
      // The case itself is reported already.
      if (exercised) return [];
      return [
        {
          kind: 'never-validated',
          gravity: 'caution',
          module: one.module,
          place,
          says: `No case with a reference uses ${one.module}.`,
          evidence: [],
          next: 'write a case that uses it and record its reference.',
        },
      ];
    }
    if (one.changed.length === 0) return [];
    const compared = outcomes.some((outcome) => outcome.case === one.case && outcome.state === 'compared');
    return [
      {
        kind: 'changed-since-validated',
        gravity: compared ? 'note' : 'caution',
        module: one.module,
        place,
        says: `${one.module} changed since the reference of ${one.case} was recorded on ${one.date?.slice(0, 10)}.`,
        evidence: one.changed.map((file) => ({ says: `${file} is not what it was` })),
        next: compared
          ? 'nothing, where the case agrees; it was rerun with the module as it is.'
          : `rerun the case: "mortise rerun ${one.case}".`,
      },
    ];
  });
}

function usesModule(produced: Produced | null, module: string): boolean {
  return Object.values(produced?.modules ?? {}).some((one) => one.module === module);
}

/** One note a way in which this machine differs from those on which references were recorded. */
export function platformFindings(
  records: readonly ReferenceRecord[],
  outcomes: readonly CaseOutcome[],
  manifests: ManifestSet,
): Finding[] {
  const differences = new Map<string, string[]>();
  for (const record of records) {
    const here = outcomes.find((outcome) => outcome.case === record.case)?.produced?.environment;
    if (here === undefined) continue;
    const there = record.environment;
    const pairs: [string, string | null, string | null][] = [
      ['system', there.system, here.system],
      ['processor', there.processor, here.processor],
      ['C library', there.library, here.library],
      ...Object.keys({ ...there.programs, ...here.programs }).map((program): [string, string | null, string | null] => [
        program,
        there.programs[program] ?? null,
        here.programs[program] ?? null,
      ]),
    ];
    for (const [what, then, now] of pairs) {
      if (then === now) continue;
      const says = `${what}: recorded with ${then ?? 'none'}, here ${now ?? 'none'}`;
      differences.set(says, [...(differences.get(says) ?? []), record.case]);
    }
  }
  if (differences.size === 0) return [];
  return [
    {
      kind: 'platform-differs',
      gravity: 'note',
      place: manifests.assembly?.placeOf(['assembly']) ?? { file: 'manifests/assembly.yaml', line: 1, column: 1 },
      says: 'This machine differs from the one on which references were recorded.',
      evidence: [...differences].map(([says, cases]) => ({ says: `${says} (${cases.join(', ')})` })),
      next: 'deviations of class roundoff may come from there; larger ones need a look.',
    },
  ];
}

/** What came of making a result again: outcomes of the recorded cases at the recorded revision against what the entry says. Pure. */
import type { DeviationClass } from '../model/deviation.ts';
import type { Entry, Remaking } from './record.ts';

/** What a rerun at the recorded revision gave. */
export interface Again {
  /** null when the revision is not in this repository. */
  readonly revision: string | null;
  readonly outcomes: readonly {
    readonly case: string;
    readonly state: string;
    readonly why: string;
    readonly class: DeviationClass | null;
    /** Quantities beyond tolerance or not comparable, first of all. */
    readonly worst: string | null;
    /** sha256 digests of the output files by name. */
    readonly outputs: Readonly<Record<string, string>>;
  }[];
  /** Content id of a file at that revision; null when it is not there. */
  contentOf(file: string): string | null;
  readonly environment: Readonly<Record<string, string>>;
}

/** The standing, with the first thing that differs: source or table, then compiler or machine, then the result. */
export function judgeRemaking(entry: Entry, again: Again): Remaking {
  const { environment } = again;
  if (again.revision === null) {
    return {
      standing: 'cannot be tried',
      because: `revision ${entry.code[0]?.commit.slice(0, 12) ?? 'unknown'} is not in this repository`,
      environment,
    };
  }
  const missing = again.outcomes.find((one) => one.state === 'not runnable' || one.state === 'no reference');
  if (again.outcomes.length === 0)
    return {
      standing: 'cannot be tried',
      because: 'the entry names no case, and no case of the revision makes its outputs',
      environment,
    };
  if (missing !== undefined)
    return { standing: 'cannot be tried', because: `case ${missing.case}: ${missing.why}`, environment };
  const failed = again.outcomes.find((one) => one.state !== 'compared');
  if (failed !== undefined)
    return {
      standing: 'not remade',
      because: firstDifference(entry, again) ?? `case ${failed.case}: ${failed.why}`,
      environment,
    };
  const beyond = again.outcomes.find((one) => one.class === 'beyond tolerance' || one.class === 'not comparable');
  if (beyond !== undefined) {
    const difference = firstDifference(entry, again);
    const result = `${beyond.worst ?? 'a result'} of case ${beyond.case} is ${beyond.class}`;
    return { standing: 'not remade', because: difference === null ? result : `${difference}; ${result}`, environment };
  }
  const same = again.outcomes.every((one) => one.class === 'bit-for-bit') && outputsEqual(entry, again);
  return { standing: same ? 'remade bit-for-bit' : 'remade within tolerance', environment };
}

/** `src/eos.f90 is not the recorded content`, or what of the environment changed; null when all is as recorded. */
function firstDifference(entry: Entry, again: Again): string | null {
  for (const module of entry.modules) {
    for (const [file, id] of Object.entries(module.contents ?? {})) {
      if (again.contentOf(file) !== id) return `${file} of ${module.module} is not the recorded content`;
    }
  }
  for (const [name, value] of Object.entries(entry.environment ?? {})) {
    const now = again.environment[name];
    if (now !== undefined && now !== value) return `${name} was ${value}, here ${now}`;
  }
  return null;
}

/** Outputs that the entry names and the rerun made must have the recorded digest. */
function outputsEqual(entry: Entry, again: Again): boolean {
  return (entry.outputs ?? []).every((output) => {
    const made = again.outcomes.map((one) => one.outputs[output.name]).find((digest) => digest !== undefined);
    return made === undefined || made === output.digest;
  });
}

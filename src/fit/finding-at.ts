/** Findings of fit, each at a part of a manifest, with evidence from both sides. */
import type { Evidence, Finding, Gravity } from '../model/finding.ts';
import type { FitKind } from '../model/finding-kind.ts';
import type { Declaration } from '../model/manifest.ts';

export type Path = readonly (string | number)[];

export interface Said {
  readonly kind: FitKind;
  readonly gravity: Gravity;
  readonly module: string;
  readonly says: string;
  readonly next: string;
  readonly evidence?: readonly Evidence[];
}

export function findingAt(
  declaration: Declaration<unknown>,
  path: Path,
  said: Said,
  part: 'key' | 'value' = 'value',
): Finding {
  return {
    kind: said.kind,
    gravity: said.gravity,
    module: said.module,
    place: declaration.placeOf(path, part),
    says: said.says,
    evidence: [{ says: 'the line meant', excerpt: declaration.excerptOf(path, part) }, ...(said.evidence ?? [])],
    next: said.next,
  };
}

/** The other side's line as evidence. */
export function seenIn(
  declaration: Declaration<unknown>,
  path: Path,
  says: string,
  part: 'key' | 'value' = 'value',
): Evidence {
  return { says, place: declaration.placeOf(path, part), excerpt: declaration.excerptOf(path, part) };
}

/** The deepest of these paths that the manifest really has, so that a finding points at what was written. */
export function firstThere(declaration: Declaration<unknown>, ...paths: readonly Path[]): Path {
  return paths.find((path) => has(declaration.value, path)) ?? paths.at(-1) ?? [];
}

function has(value: unknown, path: Path): boolean {
  let at = value;
  for (const step of path) {
    if (typeof at !== 'object' || at === null || !Object.hasOwn(at, step)) return false;
    at = (at as Record<string | number, unknown>)[step];
  }
  return true;
}

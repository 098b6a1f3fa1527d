/** Which bump a step asks for and which one was declared. Semantic Versioning 2.0.0. Pure. */
import semver from 'semver';
import { type Bump, type BumpPolicy, greaterBump } from '../model/bump.ts';
import type { Change } from '../model/change.ts';

/** The greatest of what the changes ask for. Below 1.0.0 a break asks for a minor bump (SemVer 2.0.0, item 4, as practised). */
export function askedBump(changes: readonly Change[], policy: BumpPolicy, version: string | null): Bump {
  const asked = changes.map(({ kind }) => policy[kind]).reduce<Bump>(greaterBump, 'none');
  const initial = version !== null && semver.valid(version) !== null && semver.major(version) === 0;
  return initial && asked === 'major' ? 'minor' : asked;
}

/** What one version declares over an earlier one; `none` when it is the same or goes back. */
export function declaredBump(before: string, after: string): Bump {
  const [b, a] = [semver.parse(before), semver.parse(after)];
  if (b === null || a === null || semver.compare(a, b) <= 0) return 'none';
  if (a.major !== b.major) return 'major';
  if (a.minor !== b.minor) return 'minor';
  return 'patch';
}

/** The version that would have said so. */
export function versionAfter(before: string, bump: Bump): string {
  return bump === 'none' ? before : (semver.inc(before, bump) ?? before);
}

/** `gas-state ^1.2`: the name of a contract and the range of its versions that a module was written for. */
import semver from 'semver';

export interface ContractReference {
  readonly name: string;
  readonly range: string;
}

/** Splits a reference that was found sound when its manifest was read; one without a range takes every version. */
export function contractReference(text: string): ContractReference {
  const [name = '', ...range] = text.trim().split(/\s+/);
  return { name, range: range.length === 0 ? '*' : range.join(' ') };
}

/** True when the version lies in the range. Prereleases count as the versions that they lead to: 1.3.0-rc.1 is tried before 1.3.0 is out. */
export function takesVersion(reference: ContractReference, version: string): boolean {
  return semver.satisfies(version, reference.range, { includePrerelease: true });
}

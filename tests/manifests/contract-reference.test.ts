import { describe, expect, it } from 'vitest';
import { contractReference, takesVersion } from '../../src/manifests/contract-reference.ts';

describe('a contract and a range of its versions', () => {
  it.each([
    ['gas-state ^1.2', '1.2.0', true],
    ['gas-state ^1.2', '1.9.3', true],
    ['gas-state ^1.2', '1.1.9', false],
    ['gas-state ^1.2', '2.0.0', false],
    ['gas-state >=1 <3', '2.4.0', true],
    ['gas-state 1.x', '1.0.0', true],
    ['gas-state ^0.2', '0.3.0', false],
    // A prerelease is tried before its version is out; by the strict rule no range would take it.
    ['gas-state ^1.2', '1.3.0-rc.1', true],
    ['gas-state ^1.2', '2.0.0-rc.1', false],
    ['gas-state', '7.0.0', true],
  ])('%s takes %s: %s', (text, version, takes) => expect(takesVersion(contractReference(text), version)).toBe(takes));

  it('is split at the first space', () => {
    expect(contractReference('gas-state >=1 <3')).toEqual({ name: 'gas-state', range: '>=1 <3' });
  });
});

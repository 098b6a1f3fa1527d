import { describe, expect, it } from 'vitest';
import { chainBetween, NoPath, readGraph } from '../../src/runs/commit-graph.ts';

describe('chainBetween', () => {
  it('follows first parents past merges', () => {
    const graph = readGraph('m b s2\ns2 s1\ns1 a\nb a\n');
    expect(chainBetween(graph, 'a', 'm')).toEqual(['a', 'b', 'm']);
  });

  it('follows the side branch when only that comes from the good end', () => {
    // good stands on the branch that was merged: the first parents of m never meet it.
    const graph = readGraph('n m\nm b s2\ns2 s1\n');
    expect(chainBetween(graph, 's1', 'n')).toEqual(['s1', 's2', 'm', 'n']);
  });

  it('says when neither comes from the other', () => {
    expect(() => chainBetween(readGraph('b a\n'), 'c', 'b')).toThrow(NoPath);
  });
});

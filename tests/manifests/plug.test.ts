import { expect, it } from 'vitest';
import { plug } from '../../src/manifests/plug.ts';
import { load } from './manifest-text.ts';

it('a module plugged into a component leaves the rest, the set it came from, and every place as they were', () => {
  const { set } = load();
  const other = plug(set, { 'equation-of-state': 'eos-table' });
  expect(other.assembly!.value.plugged).toEqual({ 'equation-of-state': 'eos-table', hydrodynamics: 'hydro' });
  expect(set.assembly!.value.plugged['equation-of-state']).toBe('eos-ionising');
  expect(other.assembly!.placeOf(['plugged', 'hydrodynamics'])).toEqual(
    set.assembly!.placeOf(['plugged', 'hydrodynamics']),
  );
  expect(other.assembly!.excerptOf(['plugged']).line).toBe(2);
  expect(plug(set, {})).toBe(set);
});

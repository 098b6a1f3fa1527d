/** Reading and converting against the floor of splitting the same strings into words and looking each up in a map. */
import { bench, describe } from 'vitest';
import { conversion } from '../../src/units/conversion.ts';

const pairs = [
  ['g/cm^3', 'kg/m3'],
  ['erg g**-1 K**-1', 'J/kg/K'],
  ['MeV/fm^3', 'Pa'],
  ['W m-2', 'erg/cm2/s'],
  ['km/hr', 'cm/s'],
] as const;
const map = new Map([
  ['g', 1],
  ['cm', 2],
  ['m', 3],
  ['s', 4],
]);
let fresh = 0;

describe('conversion', () => {
  bench('floor: split and look up', () => {
    for (const pair of pairs) for (const text of pair) for (const word of text.split(/[^A-Za-z]+/)) map.get(word);
  });
  bench('repeated strings', () => {
    for (const [from, to] of pairs) conversion(from, to);
  });
  bench('strings never seen before', () => {
    fresh++;
    for (const [from, to] of pairs) conversion(`${fresh} ${from}`, to);
  });
});

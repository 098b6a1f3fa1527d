/** Reading manifests against the floor: the YAML library alone on the same text. */
import { bench, describe } from 'vitest';
import { parse } from 'yaml';
import { loadManifests } from '../../src/manifests/load-manifests.ts';
import { bytes, SOUND } from './manifest-text.ts';

const MODULES = 200;
const texts = new Map<string, string>(Object.entries(SOUND));
for (let i = 0; i < MODULES; i++) {
  texts.set(
    `manifests/modules/eos-${i}.yaml`,
    SOUND['manifests/modules/eos-ionising.yaml']!.replace('module: eos-ionising', `module: eos-${i}`),
  );
}
const files = new Map([...texts].map(([path, text]) => [path, bytes(text)]));

describe(`${MODULES} modules`, () => {
  bench('floor: parse the same YAML', () => {
    for (const text of texts.values()) parse(text);
  });
  bench('load, check and cross-reference', () => {
    loadManifests(files);
  });
});

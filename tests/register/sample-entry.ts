import { registerState, type StandingEntry } from '../../src/register/chain.ts';
import { type Entry, fileOf, type RegisterRecord, seal } from '../../src/register/record.ts';

export const sampleContent: Entry = {
  result: { title: 'Front temperature', doi: '10.1000/182', figure: '4' },
  code: [{ commit: 'a'.repeat(40), swhid: `swh:1:rev:${'a'.repeat(40)}` }],
  modules: [
    {
      module: 'eos',
      component: 'equation-of-state',
      version: '2.0.3',
      manifest: `sha256:${'1'.repeat(64)}`,
      contents: { 'src/eos.f90': `swh:1:cnt:${'b'.repeat(40)}` },
    },
    { module: 'hydro', component: 'hydrodynamics', version: '1.4.0-rc.1' },
  ],
  environment: { compiler: 'gfortran 12.2', machine: 'cluster-7' },
  cases: [{ case: 'shock', quantity: 'temperature', class: 'roundoff', tolerances: 0.1 }],
  footprint: [{ quantity: 'temperature', unit: 'K', from: 10, to: 3e6 }],
  outputs: [{ name: 'profile.csv', digest: `sha256:${'c'.repeat(64)}` }],
  inputs: [{ name: 'cloud.par', digest: `sha256:${'d'.repeat(64)}` }],
  people: [{ name: 'Josiah Carberry', orcid: '0000-0002-1825-0097', role: 'author' }, { name: 'Ada Example & Sons' }],
  dates: { published: '2024-05-06' },
};

export function standing(content: Entry = sampleContent, about = '2024-05-06-front'): StandingEntry {
  const record = seal<object>({
    format: 'mortise record 1',
    kind: 'entry',
    about,
    follows: [],
    written: '2024-05-07T00:00:00.000Z',
    by: { name: 'Josiah Carberry' },
    content,
  }) as RegisterRecord;
  return registerState([{ file: fileOf(record), record, findings: [] }]).entries.get(about)!;
}

/** A report with everything that one can hold: findings of every gravity, tables, every drawing. */
import type { Deviation } from '../../src/model/deviation.ts';
import type { Report } from '../../src/report/report.ts';
import { sampleReport } from './sample-report.ts';

const values = Array.from({ length: 200 }, (_, index) => index / 20);
const reference = values.map((at) => 10 + 9990 / (1 + Math.exp((at - 5) * 4)));
const front: Deviation = {
  case: 'shock-tube',
  quantity: 'temperature',
  of: 'field',
  class: 'beyond tolerance',
  unit: 'K',
  measures: null,
  tolerances: 12.5,
  tolerance: { relative: 0.05, norm: 'pointwise' },
  profile: {
    along: { name: 'x', unit: 'cm', values },
    reference,
    result: values.map((at) => 10 + 9990 / (1 + Math.exp((at - 5.2) * 4))),
    band: reference.map((value) => 0.05 * value),
  },
};
const signed: Deviation = {
  ...front,
  quantity: 'velocity',
  unit: 'cm/s',
  class: 'within tolerance',
  tolerances: 0.4,
  profile: {
    along: { name: 'x', unit: 'cm', values },
    reference: values.map((at) => 2e5 * Math.sin(at)),
    result: values.map((at) => 2e5 * Math.sin(at + 0.01)),
    band: values.map(() => 8e3),
  },
};

export const fullReport: Report = {
  ...sampleReport,
  findings: [
    ...sampleReport.findings,
    {
      ...sampleReport.findings[0]!,
      gravity: 'caution',
      kind: 'joint-domain',
      says: 'hydro visits densities below the range of eos.',
    },
  ],
  deviations: [front, signed],
  drawings: [
    {
      draw: 'joints',
      title: 'Joints of the assembly',
      modules: [
        { module: 'hydro', component: 'hydrodynamics' },
        { module: 'eos-ionising', component: 'equation-of-state' },
        { module: 'cool-lines', component: 'cooling' },
        { module: 'dust-curve-with-a-rather-long-name', component: 'dust' },
      ],
      joints: [
        { from: 'hydro', to: 'eos-ionising', contract: 'gas-state', state: 'does not fit' },
        { from: 'hydro', to: 'cool-lines', contract: 'cooling-rate', state: 'fits' },
        { from: 'cool-lines', to: 'eos-ionising', contract: 'temperature', state: 'fits through an adapter' },
        { from: 'hydro', to: 'dust-curve-with-a-rather-long-name', contract: 'extinction', state: 'fits' },
      ],
    },
    {
      draw: 'versions',
      title: 'eos-ionising through its versions',
      steps: Array.from({ length: 30 }, (_, index) => ({
        date: `20${String(10 + Math.floor(index / 3))}-0${1 + (index % 3)}-01`,
        version: `1.${index}.0`,
        asked: (['patch', 'minor', 'major', 'none'] as const)[index % 4]!,
        declared: (['patch', 'minor', 'none', 'none'] as const)[index % 4]!,
        undeclared: index % 4 === 2,
        says: 'argument rho moved',
      })),
    },
  ],
};

/** Views with something of everything in them, for tests of the screens. */
import type { DeviationView, Views } from '../../src/screens/views.ts';

const points = Array.from({ length: 200 }, (_, index) => index / 199);
const reference = points.map((x) => 100 + 9000 / (1 + Math.exp((x - 0.5) * 40)));

export const deviation: DeviationView = {
  case: 'cloud-shock',
  of: 'field',
  quantity: 'temperature',
  unit: 'K',
  class: 'beyond tolerance',
  tolerances: 37.2,
  tolerance: { relative: 1e-3, norm: 'pointwise' },
  measures: {
    count: 200,
    identical: 20,
    maxAbsolute: 180,
    maxRelative: 0.0372,
    maxUlp: 1e12,
    l1: 0.001,
    l2: 0.004,
    linf: 0.02,
    nanInReference: 0,
    nanInResult: 0,
    infInReference: 0,
    infInResult: 0,
    worst: { index: 100, reference: 4600, result: 4771, along: { value: 5e17, unit: 'cm' } },
  },
  profile: {
    along: { name: 'x', unit: 'cm', values: points.map((x) => x * 1e18) },
    reference,
    result: reference.map(
      (value, index) => value * (1 + 0.0372 * Math.exp(-((((points[index] ?? 0) - 0.5) * 20) ** 2))),
    ),
    band: reference.map((value) => value * 1e-3),
  },
  why: '',
};

export const sampleViews: Views = {
  assembly: {
    title: 'cloud-shock code',
    revision: '3f2a91c0',
    changed: ['src/eos/ionising.ts'],
    outcome: 'held',
    asOf: null,
    open: 0,
    why: [
      'eos-ionising offers energy-zero ionised where hydro expects neutral-atom',
      'temperature of cloud-shock is 37 tolerances from its reference',
    ],
    parts: [
      {
        component: 'equation-of-state',
        module: 'eos-ionising',
        version: '2.1.0',
        age: '3 years',
        validated: '14 months ago',
        joints: { fits: 1, adapter: 0, unfit: 1 },
        undeclared: 2,
        notRunnable: null,
      },
      {
        component: 'hydrodynamics',
        module: 'hydro',
        version: '1.4.0',
        age: '5 years',
        validated: '2 months ago',
        joints: { fits: 2, adapter: 1, unfit: 0 },
        undeclared: 0,
        notRunnable: null,
      },
      {
        component: 'dust-heating',
        module: 'dust-heating',
        version: '1.0.3',
        age: '8 years',
        validated: 'never',
        joints: { fits: 0, adapter: 0, unfit: 0 },
        undeclared: 1,
        notRunnable: 'needs gfortran',
      },
    ],
    campaign: {
      rows: [
        { name: 'memory', asks: '64 TB', has: '80 TB', over: false },
        { name: 'core-hours', asks: '41 million', has: '40 million', over: true },
      ],
    },
    notices: ['eos-ionising 2.0.3 to 2.1.0: wrong ground state weight'],
    caution: null,
    job: null,
  },
  joints: [
    {
      contract: 'gas-state 1.2.0',
      expecting: { module: 'hydro', version: '1.4.0' },
      offering: { module: 'eos-ionising', version: '2.1.0' },
      seam: 'unfit',
      adapter: null,
      rows: [
        {
          quantity: 'density',
          left: { unit: 'g/cm3', intent: 'in', argument: '1 rho', conventions: '', domain: [1e-26, 1e-18] },
          right: { unit: 'g/cm3', intent: 'in', argument: '1 rho', conventions: '', domain: [1e-28, 1e-10] },
          seam: 'fits',
          says: '',
          footprint: [1e-24, 1e-20],
        },
        {
          quantity: 'internal-energy',
          left: {
            unit: 'erg/g',
            intent: 'out',
            argument: '4 eint',
            conventions: 'energy-zero neutral-atom',
            domain: null,
          },
          right: {
            unit: 'erg/g',
            intent: 'out',
            argument: '4 eint',
            conventions: 'energy-zero ionised',
            domain: null,
          },
          seam: 'unfit',
          says: 'energy-zero differs',
          footprint: null,
        },
      ],
    },
    {
      contract: 'cooling 1.0.0',
      expecting: { module: 'hydro', version: '1.4.0' },
      offering: { module: 'cooling-table', version: '1.0.1' },
      seam: 'adapter',
      adapter: { file: 'adapt-cooling.ts', text: 'export const factor = 1e-7;\n' },
      rows: [
        {
          quantity: 'rate',
          left: { unit: 'W/m3', intent: 'out', argument: '3 rate', conventions: '', domain: null },
          right: { unit: 'erg/cm3/s', intent: 'out', argument: '3 lambda', conventions: '', domain: null },
          seam: 'adapter',
          says: 'times 0.1',
          footprint: null,
        },
      ],
    },
  ],
  histories: [
    {
      module: 'eos-ionising',
      lineage: ['born 2018 in src/eos/saha.ts, renamed 2020'],
      steps: [
        {
          commit: 'aaaabbbbccccdddd',
          date: '2021-03-02',
          author: 'R. Vale',
          subject: 'Measure energies from the ground state',
          version: '2.0.3',
          asked: 'major',
          declared: 'none',
          undeclared: true,
          changes: [
            {
              says: 'energy zero of internal-energy moved',
              before: 'neutral-atom',
              after: 'ionised',
            },
          ],
        },
      ],
    },
  ],
  cases: [
    {
      name: 'cloud-shock',
      title: 'Shock into a cold cloud',
      state: 'compared',
      seconds: 1.2,
      expectedSeconds: 1.1,
      worst: 'beyond tolerance',
      why: '',
      quantities: [
        { name: 'temperature', of: 'field', class: 'beyond tolerance', tolerances: 37.2, says: 'worst at 5e17 cm' },
        { name: 'density', of: 'field', class: 'within tolerance', tolerances: 0.4, says: '' },
      ],
    },
    {
      name: 'riemann',
      title: 'Five Riemann problems',
      state: 'running',
      seconds: 0.5,
      expectedSeconds: 1,
      worst: null,
      why: '',
      quantities: [],
    },
  ],
  deviations: [deviation],
  swap: {
    cases: ['cloud-shock'],
    rows: [
      {
        exchange: 'equation-of-state=eos-table',
        cells: [{ class: 'beyond tolerance', tolerances: 37.2, why: '', deviations: [deviation] }],
        effects: ['cloud-shock: temperature leaves its band at 5e17'],
      },
      {
        exchange: 'equation-of-state=eos-perfect',
        cells: [{ class: null, tolerances: null, why: '', deviations: [] }],
        effects: [],
      },
    ],
  },
  register: null,
  findings: [
    {
      finding: {
        kind: 'unit-unknown',
        gravity: 'stop',
        module: 'eos-ionising',
        place: { file: 'manifests/modules/eos-ionising.yaml', line: 11, column: 30 },
        says: '"gm" is not a unit.',
        evidence: [],
        next: 'write "g" for gram.',
      },
      accepted: null,
    },
  ],
};

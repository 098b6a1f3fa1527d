import type { Report } from '../../src/report/report.ts';
import { deviation } from '../screens/sample-views.ts';

/** Text as a hostile repository could hold it. */
export const HOSTILE = '</script><img src=x onerror=alert(1)> [link](javascript:x) @everyone \u001b[31m\u202e|`*_#';

export const sampleReport: Report = {
  title: 'Audit of cloud',
  command: 'audit',
  made: '2026-01-02T03:04:05.000Z',
  outcome: 'held',
  facts: [{ name: 'revision', value: 'a'.repeat(40) }],
  sections: [
    {
      title: 'Modules',
      head: ['component', 'module', ''],
      rows: [['equation-of-state', HOSTILE, { text: 'does not fit', mood: 'alarm' }]],
    },
    { title: 'Empty', head: ['a'], rows: [] },
  ],
  findings: [
    {
      kind: 'unit-unknown',
      gravity: 'stop',
      module: 'eos',
      place: { file: 'manifests/modules/eos é.yaml', line: 11, column: 30 },
      says: '"erg/gm" is not a unit.',
      evidence: [
        {
          says: 'the line meant',
          excerpt: { line: 11, text: '    units: {internal-energy: erg/gm}', column: 30, width: 6 },
        },
        { says: 'declared here', place: { file: 'src/eos.f90', line: 3, column: 1, revision: 'b'.repeat(40) } },
      ],
      next: 'write "g" for gram.',
    },
    {
      kind: 'acceptance-unused',
      gravity: 'note',
      place: { file: 'manifests/accepted.yaml', line: 1, column: 1 },
      says: HOSTILE,
      evidence: [{ says: HOSTILE }],
      next: 'remove it.',
    },
  ],
  accepted: [
    {
      finding: {
        kind: 'unit-ambiguous',
        gravity: 'caution',
        place: { file: 'src/x.f90', line: 2, column: 2 },
        says: 'which year?',
        evidence: [],
        next: 'say which.',
      },
      acceptance: { finding: 'unit-ambiguous', reason: 'Julian, as everywhere here', until: '2027-01-01' },
    },
  ],
  deviations: [{ ...deviation, of: 'field', why: HOSTILE, profile: deviation.profile! }],
  drawings: [
    {
      draw: 'joints',
      title: 'Joints',
      modules: [
        { module: 'eos', component: 'equation-of-state' },
        { module: 'hydro', component: 'hydrodynamics' },
      ],
      joints: [{ from: 'hydro', to: 'eos', contract: 'gas-state', state: 'does not fit' }],
    },
    {
      draw: 'versions',
      title: 'eos through time',
      steps: [
        { date: '2020-01-01', version: '1.0.0', asked: 'major', declared: 'none', undeclared: true, says: HOSTILE },
      ],
    },
  ],
  caution: 'Mortise compares and records; it certifies nothing.',
};

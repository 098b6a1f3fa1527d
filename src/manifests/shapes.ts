/**
 * What each kind of manifest may hold, key by key: the one table behind the checks, the messages and the published schemas.
 * The records of src/model/manifest.ts say the same as types.
 */
import { BUMPS, CHANGE_KINDS } from '../model/bump.ts';
import { choice, list, map, may, must, type RecordShape, record, type Shape, text } from './shape.ts';

const flag: Shape = { is: 'flag' };
const count: Shape = { is: 'number', least: 1, whole: true };
const amount: Shape = { is: 'number', least: 0 };
const positive: Shape = { is: 'number', above: 0 };
const range: Shape = { is: 'range' };
const title = may(text('prose'), 'One line for people.');
const domain = map('name', range);
const units = map('name', text('unit'));
const conventions = map('name', text('name'));

const toleranceKeys = {
  absolute: may(amount, "Allowed difference in the quantity's unit."),
  relative: may(amount, 'Allowed difference over the reference.'),
  ulp: may(amount, 'Allowed difference in units in the last place.'),
  norm: may(
    choice('pointwise', 'L1', 'L2', 'Linf'),
    'How the difference of a field is measured; pointwise when absent.',
  ),
  reason: may(text('prose'), 'Why this much is allowed.'),
};
const tolerance = record('a tolerance', toleranceKeys);

const contractQuantity = record('a quantity', {
  unit: must(text('unit'), 'The unit that a joint has unless a side says otherwise.'),
  intent: must(choice('in', 'out', 'inout'), 'Seen from the side that offers.'),
  title,
  shape: may(
    { is: 'either', of: [choice('scalar'), list(text('variable'), 1)] },
    'scalar (the default) or the extents by name: [zones, species].',
  ),
  domain: may(range, 'States that make sense at all, in this unit.'),
  positive: may(flag, 'True when a value at or below zero is an error.'),
  optional: may(flag, 'True when an offer may leave it out.'),
  conventions: may(
    map('name', list(text('name'), 1)),
    'Choices that no unit shows, by name, with those open to a module; the first is the default.',
  ),
});

export const CONTRACT: RecordShape = record('a contract', {
  contract: must(text('name'), 'The name of the contract.'),
  title,
  version: must(text('version'), 'Version of the contract (Semantic Versioning 2.0.0).'),
  component: must(text('name'), 'The physics role whose modules offer it.'),
  quantities: must(
    map('name', contractQuantity, 1),
    'The quantities that cross the joint, in the order of the arguments of a procedure that offers them.',
  ),
  identities: may(
    list(text('name')),
    'Identities that every offer must satisfy: first-law, maxwell, detailed-balance.',
  ),
});

const offer = record('an offer', {
  contract: must(text('contract-reference'), 'Contract and range of its versions: gas-state ^1.2.'),
  procedure: may(text('symbol'), 'The procedure that is called.'),
  arguments: may(
    map('name', text('symbol')),
    'Quantity of the contract to the argument, result, field, variable or data set that carries it.',
  ),
  besides: may(list(text('symbol')), 'Arguments that carry no quantity: sizes, error codes, switches.'),
  units: may(units, "Units that differ from the contract's."),
  conventions: may(conventions, 'The convention followed, where the contract leaves a choice.'),
  domain: may(domain, 'States for which this offer is valid, in the units of this offer.'),
});

const expectation = record('an expectation', {
  contract: must(text('contract-reference'), 'Contract and range of its versions: gas-state ^1.2.'),
  takes: may(list(text('name'), 1), 'The quantities that are needed, when not all of the contract.'),
  order: may(list(text('name'), 1), "The quantities in the order in which they are passed, when not the offer's."),
  calls: may(text('symbol'), 'The procedure that this module calls, where the code names it.'),
  units: may(units, "Units that differ from the contract's."),
  conventions: may(conventions, 'The convention relied on, where the contract leaves a choice.'),
  domain: may(domain, 'States that this module can reach when it asks, in the units of this side.'),
  optional: may(flag, 'True when the module works without it.'),
  adapter: may(
    record('an adapter', {
      file: must(text('path'), 'The file in which both sides are brought together.'),
      procedure: may(text('symbol'), 'The procedure that does it.'),
    }),
    'Where the code already converts between the two sides of this joint.',
  ),
});

const tableAxis = record('a table axis', {
  quantity: must(text('name'), 'The quantity that runs along this axis.'),
  unit: may(text('unit'), 'Its unit in the table.'),
  spacing: may(choice('linear', 'log10', 'ln', 'uneven'), 'How its points are spaced.'),
  range: may(range, 'Its first and last point, in its unit.'),
});

export const MODULE: RecordShape = record('a module', {
  module: must(text('name'), 'The name of the module.'),
  title,
  component: must(text('name'), 'The physics role that it fills.'),
  version: must(text('version'), 'Version of the module (Semantic Versioning 2.0.0).'),
  source: must(
    record('a source', {
      language: must(
        choice('fortran', 'c', 'c++', 'python', 'typescript', 'javascript', 'table'),
        'The language of the files; table for data.',
      ),
      files: must(list(text('path'), 1), 'The files, from the root of the repository.'),
      procedures: may(list(text('symbol'), 1), 'Procedures that make the interface; all public ones when absent.'),
    }),
    'Where the module stands.',
  ),
  offers: may(list(offer), 'What the module gives.'),
  expects: may(list(expectation), 'What the module needs from others.'),
  tables: may(
    list(
      record('a table', {
        file: must(text('path'), 'The data file, from the root of the repository.'),
        digest: may(text('digest'), 'sha256: and 64 hexadecimal digits; an altered table is then found.'),
        axes: may(map('symbol', tableAxis), 'Data set or column to the axis that it is.'),
      }),
    ),
    'Data files that the module reads.',
  ),
  select: may(
    map('variable', { is: 'scalar' }),
    'What the build needs to plug this module in: fills {select.NAME} in commands.',
  ),
  needs: may(list(text('symbol')), 'Programs without which the module cannot run.'),
});

const output = record('an output', {
  file: must(text('path'), 'The file that the run writes, below {out}.'),
  along: may(text('symbol'), 'Data set or column that is the axis of the profile.'),
  match: may(text('symbol'), 'Data set whose values (ids, coordinates) pair the elements when their order may differ.'),
  patterns: may(
    map('name', text('prose')),
    'For a log: data set name to the text around its number, with {} where the number stands.',
  ),
  layout: may(
    record('a layout', {
      'byte-order': may(choice('little', 'big'), 'little when absent.'),
      skip: may({ is: 'number', least: 0, whole: true }, 'Bytes before the first array.'),
      arrays: must(
        list(
          record('an array', {
            name: must(text('symbol'), 'Name of the data set.'),
            type: must(
              choice(
                'float64',
                'float32',
                'float16',
                'int8',
                'uint8',
                'int16',
                'uint16',
                'int32',
                'uint32',
                'int64',
                'uint64',
                'complex64',
                'complex128',
              ),
              'Type of one element.',
            ),
            shape: must(list({ is: 'number', least: 0, whole: true }), 'Extents, the fastest last; [] for one number.'),
            unit: may(text('unit'), 'Its unit.'),
          }),
          1,
        ),
        'The arrays in the order in which they lie in the file.',
      ),
    }),
    'For plain binary and Fortran records, which say nothing about themselves.',
  ),
  shift: may(
    record('a shift', { tolerance: must(positive, 'How far the result may lie shifted, in the unit of the axis.') }),
    'The result may lie shifted along the axis; it is moved back before it is compared.',
  ),
  quantities: must(
    map(
      'name',
      record('an output quantity', {
        dataset: must(text('symbol'), 'Data set or column.'),
        unit: must(text('unit'), 'Its unit.'),
        tolerance: must(tolerance, 'How far it may move from the reference.'),
        extensive: may(flag, 'True for an amount a cell: between unlike grids its total is kept, not its values.'),
        weight: may(text('symbol'), 'Data set of weights (cell masses, volumes, time steps) for the norms.'),
        as: may(
          choice('spectrum', 'histogram'),
          'For turbulent fields: compared as power spectrum or as distribution of values.',
        ),
        bins: may(count, 'Bins of the histogram; 64 when absent.'),
      }),
      1,
    ),
    'What is compared.',
  ),
});

export const CASE: RecordShape = record('a case', {
  case: must(text('name'), 'The name of the case.'),
  title,
  run: must(text('command'), 'The command, with {out}, {root} and {select.NAME} filled in; never given to a shell.'),
  inputs: may(list(text('path')), 'Files that the command reads.'),
  uses: may(list(text('name')), 'Components whose modules the case runs; all plugged ones when absent.'),
  with: may(map('name', text('name')), "Component to the module put in place of the assembly's."),
  outputs: must(list(output, 1), 'What the run writes.'),
  features: may(
    map(
      'name',
      record('a feature', {
        of: must(text('name'), 'The output quantity that it is made from.'),
        take: must(
          choice(
            'maximum',
            'minimum',
            'where-maximum',
            'integral',
            'final',
            'mean',
            'crossing',
            'half-width',
            'slope',
            'period',
            'formula',
          ),
          'How the number is made.',
        ),
        level: may({ is: 'number' }, 'The level that crossing looks for.'),
        formula: may(text('prose'), 'For formula: ordinary notation over quantities, maximum(p) / mean(p).'),
        unit: may(text('unit'), 'Unit of the number.'),
        tolerance: must(tolerance, 'How far it may move from the reference.'),
      }),
    ),
    'Single numbers made from the outputs.',
  ),
  conserved: may(
    list({
      is: 'either',
      of: [
        text('name'),
        record('a conserved total', {
          total: must(text('name'), 'Name of the total.'),
          of: must(text('name'), 'The output quantity that holds its values along the run.'),
          tolerance: may(tolerance, 'How far it may move from its first value.'),
        }),
      ],
    }),
    'Totals that the run must keep.',
  ),
  footprint: may(map('name', text('name')), 'Quantity of a contract to the output quantity whose extremes it visits.'),
  noise: may(
    record('the noise of a code', {
      exchanges: may(list(text('prose')), 'Each is one run: set.FFLAGS=-O3, select.RANKS=4.'),
      'last-bit': may(list(text('path')), 'Text inputs whose real numbers are moved by one unit in the last place.'),
      runs: may(count, 'Runs with the last bit moved; 8 when absent.'),
    }),
    'Runs that change no physics; "mortise rerun --noise" measures what they move, and that is allowed.',
  ),
  'grid-error': may(
    map(
      'name',
      record('an error of the grid', {
        fine: must({ is: 'number' }, 'The number on the fine grid.'),
        middle: must({ is: 'number' }, 'On the middle grid.'),
        coarse: must({ is: 'number' }, 'On the coarse grid.'),
        ratio: must(positive, 'Spacing of the middle grid over the fine one, above 1.'),
        'coarse-ratio': may(positive, 'Spacing of the coarse grid over the middle one; ratio when absent.'),
        reason: may(text('prose'), 'Where the three numbers come from.'),
      }),
    ),
    'Quantity or feature to its values on three grids: what is beyond tolerance but below the error of the grid is said as such.',
  ),
  'time-limit-seconds': may(positive, 'The run is ended after this time.'),
});

export const ASSEMBLY: RecordShape = record('an assembly', {
  assembly: must(text('name'), 'The name of the code.'),
  title,
  plugged: must(map('name', text('name'), 1), 'Component to the module plugged into it.'),
  build: may(
    record('a build', {
      run: must(text('command'), 'The command that builds the code; never given to a shell.'),
      makes: must(list(text('path'), 1), 'What it makes.'),
      promote: may(
        map(['real', 'double precision', 'complex', 'integer', 'logical'], count),
        "Bytes that the build's switches give a declared default: {real: 8}.",
      ),
      define: may(map('variable', { is: 'scalar', asText: true }), 'Preprocessor names that the build sets.'),
    }),
    'How the code is built.',
  ),
  environment: may(
    record('an environment', {
      pass: may(list(text('variable')), 'Variables passed on; PATH and HOME always are.'),
      set: may(map('variable', { is: 'scalar', asText: true }), 'Variables set for every run.'),
    }),
    'The environment of builds and runs.',
  ),
  executors: may(
    map(
      'name',
      record('an executor', {
        kind: must(choice('local', 'slurm'), 'Where runs go.'),
        'at-once': may(count, 'How many runs at once.'),
        'time-limit-seconds': may(positive, 'A run is ended after this time.'),
        'memory-megabytes': may(positive, 'Memory that a run may use.'),
        cores: may(count, 'Cores that one run takes; 1 when absent.'),
        launcher: may(text('command'), 'Words put before the command of each run, such as "mpirun -n 4".'),
      }),
    ),
    'Where cases can run.',
  ),
  policy: may(
    map(Object.keys(CHANGE_KINDS), choice(...BUMPS)),
    'Least bump that a kind of change asks for, where it differs from the default.',
  ),
  campaign: may(
    record('a campaign', {
      title,
      grid: must(list(count, 1), 'Zones along each direction of space.'),
      fields: may(amount, 'Values a zone holds besides those by species, bin and direction.'),
      species: may(count, 'Species whose distribution is followed.'),
      'energy-bins': may(count, 'Energy bins of each species.'),
      directions: may(count, 'Directions of flight of each bin.'),
      'bytes-per-value': may(count, '8 when absent.'),
      copies: may(count, 'Copies of the state that the scheme holds at once; 1 when absent.'),
      steps: must(count, 'Time steps.'),
      'output-every': may(count, 'Steps between two outputs.'),
      cost: may(
        record('a cost', {
          'core-seconds-per-zone-step': may(positive, 'Measured cost of one zone and one step.'),
          'measured-by': may(text('name'), 'The case whose run measures it.'),
          zones: may(count, 'Zones of that case.'),
          steps: may(count, 'Steps of that case.'),
        }),
        'What a zone and a step cost.',
      ),
      allocation: may(
        record('an allocation', {
          'core-hours': may(positive, 'Core-hours granted.'),
          'memory-bytes': may(positive, 'Memory of the nodes used.'),
          'storage-bytes': may(positive, 'Storage granted.'),
        }),
        'What was granted.',
      ),
      domain: may(domain, "States that the campaign will visit, in the contracts' units."),
    }),
    'The run to come.',
  ),
  consequence: may(choice('none', 'safety-related'), 'safety-related puts its caution into every report.'),
});

export const ACCEPTED: RecordShape = record('a list of accepted findings', {
  accepted: must(
    list(
      record('an acceptance', {
        finding: must(text('name'), 'The kind of finding.'),
        module: may(text('name'), 'Only those about this module.'),
        file: may(text('path'), 'Only those in this file.'),
        says: may(text('prose'), 'Only those whose sentence holds these words.'),
        revision: may(text('prose'), 'Only those at this commit.'),
        reason: must(text('prose'), 'Why it may stand.'),
        by: may(text('prose'), 'Who accepted it.'),
        until: may(text('day'), 'Last day on which it may stand.'),
      }),
    ),
    'Findings that may stand, each with a reason.',
  ),
});

export const MANIFEST_SHAPES = {
  assembly: ASSEMBLY,
  module: MODULE,
  contract: CONTRACT,
  case: CASE,
  accepted: ACCEPTED,
} as const satisfies Record<string, RecordShape>;

export type ManifestSort = keyof typeof MANIFEST_SHAPES;

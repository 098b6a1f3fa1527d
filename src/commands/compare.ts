/** `mortise compare`: two result files, or two folders of them, data set by data set. */
import { resolve } from 'node:path';
import { ROUNDOFF_ULP } from '../compare/compare-arrays.ts';
import { compareFiles, type FileComparison } from '../compare/compare-files.edge.ts';
import { toleranceText } from '../compare/tolerance.ts';
import { DEVIATION_CLASSES, type DeviationClass, type Norm, type Tolerance, worseClass } from '../model/deviation.ts';
import { printable } from '../model/printable.ts';
import { exists } from '../outputs/byte-source.edge.ts';
import { deviationsText } from '../report/deviation-text.ts';
import { type Command, EXIT, type Invocation, UsageError } from './command.ts';
import { textOptions } from './text-options.ts';

const NORMS: readonly Norm[] = ['pointwise', 'L1', 'L2', 'Linf'];

export const command: Command = {
  name: 'compare',
  answers: 'how far is one result file from another, where is it worst, and is that more than allowed',
  usage: 'mortise compare REFERENCE RESULT',
  options: {
    absolute: { type: 'string', value: 'N', says: 'allow |result - reference| <= N, in the unit of the data set' },
    relative: { type: 'string', value: 'N', says: 'allow N times |reference|, added to the absolute part' },
    ulp: { type: 'string', value: 'N', says: 'allow N units in the last place' },
    norm: { type: 'string', value: 'NORM', says: 'pointwise (the default), L1, L2 or Linf' },
    along: {
      type: 'string',
      value: 'NAME',
      says: 'the data set that is the axis: fields on unlike grids are put onto the coarser one',
    },
    match: { type: 'string', value: 'NAME', says: 'pair elements by the values of this data set (ids, coordinates)' },
    only: { type: 'string', value: 'NAME', multiple: true, says: 'compare this data set; may be given several times' },
  },
  help: `
REFERENCE and RESULT are two files, or two folders whose files are paired by name. The format is told from the content:
HDF5 and NetCDF-4, NetCDF classic, npy and npz, FITS, columns of text, CSV, JSON, Fortran unformatted records, plain
binary, and logs with "name = number". Everything is read in pieces, so the size does not matter.

Without a tolerance only roundoff is allowed: ${ROUNDOFF_ULP} units in the last place of the stored type, element by element.
A NaN never passes. The classes are ${DEVIATION_CLASSES.join(', ')}.

Exit status 1 when anything is beyond tolerance, not comparable, or on one side only.

  mortise compare old/profile.h5 new/profile.h5 --relative 1e-6`,
  async run(invocation, surroundings) {
    const [reference, result, ...more] = invocation.words;
    if (reference === undefined || result === undefined || more.length > 0) {
      throw new UsageError(
        `compare takes two files or folders, a reference and a result; ${invocation.words.length} given`,
      );
    }
    for (const path of [reference, result]) {
      if (!exists(resolve(surroundings.cwd, path)))
        throw new UsageError(`there is no file or folder "${printable(path)}"`);
    }
    const tolerance = toleranceOf(invocation);
    const only = invocation.options.only as readonly string[] | undefined;
    const textOption = (name: 'along' | 'match') => {
      const value = invocation.options[name];
      return typeof value === 'string' ? { [name]: value } : {};
    };
    let comparison: FileComparison;
    try {
      comparison = await compareFiles(resolve(surroundings.cwd, reference), resolve(surroundings.cwd, result), {
        ...(tolerance === null ? {} : { tolerance }),
        ...(only === undefined ? {} : { only }),
        ...textOption('along'),
        ...textOption('match'),
        signal: surroundings.signal,
      });
    } catch (error) {
      if (!surroundings.signal.aborted) throw error;
      surroundings.err('interrupted\n');
      return EXIT.interrupted;
    }
    const worst = worstOf(comparison);
    if (invocation.options.json === true) {
      const document = { reference, result, tolerance, class: worst, ...comparison };
      surroundings.out(`${JSON.stringify(document, finiteOrText, 2)}\n`);
    } else {
      surroundings.out(asText(comparison, tolerance, textOptions(invocation, surroundings)));
    }
    return worst === 'beyond tolerance' || worst === 'not comparable' ? EXIT.stop : EXIT.ok;
  },
};

function toleranceOf(invocation: Invocation): Tolerance | null {
  const number = (name: 'absolute' | 'relative' | 'ulp') => {
    const text = invocation.options[name] as string | undefined;
    if (text === undefined) return {};
    const value = Number(text);
    if (text.trim() === '' || !(value >= 0) || !Number.isFinite(value)) {
      throw new UsageError(`--${name} takes a number that is not negative, such as 1e-6; "${printable(text)}" is none`);
    }
    return { [name]: value };
  };
  const norm = (invocation.options.norm as Norm | undefined) ?? 'pointwise';
  if (!NORMS.includes(norm)) throw new UsageError(`--norm is one of ${NORMS.join(', ')}; "${printable(norm)}" is none`);
  const parts = { ...number('absolute'), ...number('relative'), ...number('ulp') };
  if (Object.keys(parts).length > 0) return { ...parts, norm };
  if (norm !== 'pointwise') throw new UsageError(`--norm ${norm} needs --relative or --absolute with it`);
  return null;
}

/** What only one side has cannot be compared. */
function worstOf(comparison: FileComparison): DeviationClass {
  const start: DeviationClass = comparison.missing.length > 0 ? 'not comparable' : 'bit-for-bit';
  return comparison.deviations.reduce<DeviationClass>((worst, one) => worseClass(worst, one.class), start);
}

/** JSON has no infinities and no NaN; as text they are at least not lost. */
function finiteOrText(_key: string, value: unknown): unknown {
  return typeof value === 'number' && !Number.isFinite(value) ? String(value) : value;
}

function asText(
  comparison: FileComparison,
  tolerance: Tolerance | null,
  options: ReturnType<typeof textOptions>,
): string {
  const files = [...new Set(comparison.deviations.map((one) => one.case))];
  const parts = files.map((file) => {
    const own = comparison.deviations.filter((one) => one.case === file);
    return `${file === '' ? '' : `${printable(file)}\n`}${deviationsText(own, options)}`;
  });
  const missing = comparison.missing.map(({ file, dataset, from }) => {
    const what =
      dataset === undefined ? printable(file) : `${printable(dataset)}${file === '' ? '' : ` of ${printable(file)}`}`;
    return `only in the ${from === 'result' ? 'reference' : 'result'}: ${what}\n`;
  });
  return `allowed: ${toleranceText(tolerance)}\n${[...parts, missing.join('')].filter((part) => part !== '').join('\n')}`;
}

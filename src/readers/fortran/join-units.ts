/** Readings of the units of a file to the reading of the file. */
import type { FileInterface } from '../../model/interface.ts';
import { joinReadings } from '../join-readings.ts';
import type { FortranUnit } from './cut-units.ts';

/**
 * The interface of a file whose units were read one by one (`readFortranUnit`), each with lines counted from its own first.
 * The readings are not changed: one reading may serve many files. Equal to `readFortran` of the whole file.
 *
 * @param units     of `fortranUnits`, in order
 * @param readings  one for each
 */
export function joinFortranUnits(units: readonly FortranUnit[], readings: readonly FileInterface[]): FileInterface {
  const form = units[0]?.form;
  const { language, ...joined } = joinReadings('fortran', units, readings);
  return { language, ...(form === undefined ? {} : { form }), ...joined };
}

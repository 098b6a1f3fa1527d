/** Readings of the units of a file to the reading of the file. */
import type { FileInterface } from '../../model/interface.ts';
import { joinReadings } from '../join-readings.ts';
import type { CUnit } from './cut-units.ts';
import { type CUnitReading, settled } from './settle.ts';

/**
 * The interface of a file whose units were read one by one (`readCUnit`), each with lines counted from its own first.
 * The readings are not changed: one reading may serve many files. Equal to `readC` of the whole file.
 *
 * @param units     of `cUnits`, in order
 * @param readings  one for each
 */
export function joinCUnits(units: readonly CUnit[], readings: readonly CUnitReading[]): FileInterface {
  const joined = joinReadings(units[0]!.language, units, readings);
  return settled({ ...joined, macroConstants: readings.flatMap((one) => one.macroConstants) });
}

/** One Fortran file, fixed or free form, to its interface. Bytes in, plain data out; nothing is resolved across files here. */
import { emptyInterface, type FileInterface } from '../../model/interface.ts';
import { CLAIM_WORDS } from '../claims/comment-gate.ts';
import type { ReadOptions } from '../read-options.ts';
import { Conditions } from './conditions.ts';
import { cutFile, type FortranUnit, type UnitOptions } from './cut-units.ts';
import { NOT_CALLED_WORDS } from './intrinsics.ts';
import { Names } from './names.ts';
import { Found } from './reading.ts';
import { SourceText } from './source-text.ts';
import { UnitReader } from './unit-reader.ts';

export interface FortranOptions extends ReadOptions, UnitOptions {}

const NAMES = new Names([...CLAIM_WORDS, ...NOT_CALLED_WORDS]);

/**
 * Reads a file. Never throws, whatever the bytes; what could not be read is told in `incomplete`.
 * A byte that is not ASCII counts as one column in files that are not valid UTF-8, as in Latin-1.
 */
export function readFortran(path: string, bytes: Uint8Array, options: FortranOptions = {}): FileInterface {
  const { form, columns, cuts } = cutFile(path, bytes, options);
  if (bytes.includes(0)) return binary(form);
  NAMES.trim();
  const found = new Found();
  const conditions = new Conditions(options.define);
  for (const { from, to, line } of cuts)
    new UnitReader(
      path,
      new SourceText(bytes, bytes.subarray(from, to)),
      NAMES,
      form,
      columns,
      conditions,
      options,
      found,
      line,
    ).read(from, to, line);
  return interfaceOf(form, found);
}

/**
 * Reads one unit of a file alone. Lines are counted from the unit's first.
 *
 * @param bytes  of the whole file, or of the unit alone (then `unit.from` is ignored)
 */
export function readFortranUnit(
  path: string,
  bytes: Uint8Array,
  unit: FortranUnit,
  options: ReadOptions = {},
): FileInterface {
  const { form, columns, conditions: state } = unit;
  const own = bytes.length === unit.to - unit.from ? bytes : bytes.subarray(unit.from, unit.to);
  if (own.includes(0)) return binary(form);
  NAMES.trim();
  const found = new Found();
  new UnitReader(
    path,
    new SourceText(own),
    NAMES,
    form,
    columns,
    new Conditions(options.define, state),
    options,
    found,
    1,
  ).read(0, own.length, 1);
  return interfaceOf(form, found);
}

function binary(form: 'fixed' | 'free'): FileInterface {
  return {
    ...emptyInterface('fortran'),
    form,
    incomplete: [{ line: 1, why: 'this file holds NUL bytes: it is no source text' }],
  };
}

function interfaceOf(form: 'fixed' | 'free', found: Found): FileInterface {
  return {
    language: 'fortran',
    form,
    procedures: found.procedures.sort((a, b) => a.line - b.line || a.column - b.column),
    commons: found.commons,
    types: found.types,
    variables: found.variables,
    constants: found.constants,
    literals: found.literals,
    uses: found.uses,
    includes: found.includes,
    generics: found.generics,
    calls: found.calls,
    claims: found.claims,
    storage: found.storage,
    externals: found.externals,
    datasets: [],
    ...(found.statements.length === 0 ? {} : { statements: found.statements }),
    incomplete: found.incomplete,
  };
}

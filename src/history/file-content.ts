/**
 * One blob under a path, read only as far as a comparison asks. Versions of a Fortran file share nearly all of their units: only those
 * that the other version has not are read, and each distinct unit once. Pure but for the readers it loads.
 */
import type { FileInterface } from '../model/interface.ts';
import type { FortranUnit } from '../readers/fortran/cut-units.ts';
import { languageOf, readSource } from '../readers/read-source.ts';
import { decodeText } from '../sources/git-object.ts';
import { type Bodies, bodiesOf, comparable } from './procedure-bodies.ts';
import type { SourceSide } from './source-side.ts';

export interface FileContent {
  /** All of it. */
  whole(): SourceSide;
  /** What of it the other has not, unit for unit; all of it where a file is not cut into units. */
  besides(other: FileContent): SourceSide;
}

/** A file that is read in one piece. */
export class WholeContent implements FileContent {
  private readonly side: SourceSide;

  constructor(side: SourceSide) {
    this.side = side;
  }

  whole(): SourceSide {
    return this.side;
  }

  besides(): SourceSide {
    return this.side;
  }
}

export async function contentOf(path: string, bytes: Uint8Array): Promise<FileContent> {
  if (languageOf(path, bytes.subarray(0, 8192)) === 'fortran') {
    const [{ fortranUnits }, { readFortranUnit }, { joinFortranUnits }] = await Promise.all([
      import('../readers/fortran/cut-units.ts'),
      import('../readers/fortran/read-fortran.ts'),
      import('../readers/fortran/join-units.ts'),
    ]);
    try {
      return new FortranContent(path, bytes, fortranUnits(path, bytes), readFortranUnit, joinFortranUnits);
    } catch {
      // Read in one piece below, which tells what failed.
    }
  }
  const code = await readSource(path, bytes);
  return new WholeContent({
    path,
    code: comparable(code),
    bodies: bodiesOf(code, bytes),
    text: () => decodeText(bytes),
  });
}

interface UnitReading {
  readonly code: FileInterface;
  /** By lines counted from the unit's first. */
  readonly bodies: Bodies;
  readonly bytes: number;
}

/** Units read lately: what a commit leaves behind is what the next change of it begins with. */
const units = new Map<string, UnitReading>();
/** Of source text; its readings take about ten times as much. */
const MOST_UNIT_BYTES = 8 << 20;
let unitBytes = 0;

class FortranContent implements FileContent {
  private readonly path: string;
  private readonly bytes: Uint8Array;
  private readonly units: readonly FortranUnit[];
  private readonly readUnit: typeof import('../readers/fortran/read-fortran.ts').readFortranUnit;
  private readonly join: typeof import('../readers/fortran/join-units.ts').joinFortranUnits;

  constructor(
    path: string,
    bytes: Uint8Array,
    cut: readonly FortranUnit[],
    readUnit: FortranContent['readUnit'],
    join: FortranContent['join'],
  ) {
    this.path = path;
    this.bytes = bytes;
    this.units = cut;
    this.readUnit = readUnit;
    this.join = join;
  }

  whole(): SourceSide {
    return this.sideOf(this.units);
  }

  besides(other: FileContent): SourceSide {
    if (!(other instanceof FortranContent)) return this.whole();
    const there = new Map<string, number>();
    for (const { id } of other.units) there.set(id, (there.get(id) ?? 0) + 1);
    return this.sideOf(
      this.units.filter(({ id }) => {
        const count = there.get(id) ?? 0;
        if (count > 0) there.set(id, count - 1);
        return count === 0;
      }),
    );
  }

  private sideOf(chosen: readonly FortranUnit[]): SourceSide {
    const readings = chosen.map((unit) => this.reading(unit));
    const code = this.join(
      chosen,
      readings.map((one) => one.code),
    );
    const bodies: Bodies = {
      get: (line) => {
        const index = chosen.findLastIndex((unit) => unit.line <= line);
        return readings[index]?.bodies.get(line - chosen[index]!.line + 1);
      },
      *values() {
        for (const { bodies: own } of readings) yield* own.values();
      },
    };
    // Lines of units that are not looked at stay empty, so that every line keeps its number.
    const text = () => {
      let written = '';
      let line = 1;
      for (const unit of chosen) {
        const part = decodeText(this.bytes.subarray(unit.from, unit.to));
        written += '\n'.repeat(Math.max(0, unit.line - line)) + part;
        line = Math.max(line, unit.line) + part.split('\n').length - 1;
      }
      return written;
    };
    return { path: this.path, code, bodies, text };
  }

  private reading(unit: FortranUnit): UnitReading {
    const known = units.get(unit.id);
    if (known !== undefined) {
      // Set anew, so that the one not asked for the longest is the first to go.
      units.delete(unit.id);
      units.set(unit.id, known);
      return known;
    }
    const own = this.bytes.subarray(unit.from, unit.to);
    const code = this.readUnit(this.path, own, unit);
    const reading = { code: comparable(code), bodies: bodiesOf(code, own), bytes: own.length };
    unitBytes += own.length;
    for (const [id, { bytes }] of units) {
      if (unitBytes <= MOST_UNIT_BYTES) break;
      units.delete(id);
      unitBytes -= bytes;
    }
    units.set(unit.id, reading);
    return reading;
  }
}

/**
 * Reading a checkout's whole Fortran on one thread, everything that a reader yields included, beside its floors in one run: `cat` of
 * the files, and `gfortran -fsyntax-only` over the same files (goal: 1/50 of that; 30 MB/s a thread).
 * MORTISE_FORTRAN_SOURCE names a folder of sources; without it, generated ones. Then a history of them: each file in twenty versions
 * that differ in one unit, whole and unit by unit with what was read kept by its id.
 */
import { spawnSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, bench } from 'vitest';
import type { FileInterface } from '../../../src/model/interface.ts';
import { fortranUnits } from '../../../src/readers/fortran/cut-units.ts';
import { joinFortranUnits } from '../../../src/readers/fortran/join-units.ts';
import { readFortran, readFortranUnit } from '../../../src/readers/fortran/read-fortran.ts';
import { describeWith } from '../../support/tools.ts';

const folder = mkdtempSync(join(tmpdir(), 'mortise-bench-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

function generated(): string {
  const root = join(folder, 'generated');
  mkdirSync(root);
  for (let file = 0; file < 150; file++) {
    let text = '';
    for (let unit = 0; unit < 20; unit++) {
      text += `C> Advances the ${unit}th quantity.
C     rho   :: density [g/cm3]
C     temp  :: temperature (in K)
      subroutine step_${file}_${unit}(rho, temp, n, work)
      implicit none
      integer n, i, j
      real*8 rho(n), temp(n), work(n, *), total, limit
      real*8 bulk, shear
      common /coefficients/ bulk, shear, limit
      parameter (total = 1.5d0)
      external limiter
      real*8 limiter
C     The sum over all cells comes first.
      do 10 i = 1, n
         work(i, 1) = bulk*rho(i) + shear*temp(i)**2
         if (work(i, 1) .gt. limit) work(i, 1) = limiter(work(i, 1), 0.5)
   10 continue
      call exchange_${unit % 7}(work, n, 1, 'halo')
      do j = 2, 4
         do i = 2, n - 1
            work(i, j) = 0.25d0*(work(i - 1, j) + work(i + 1, j)
     &                 - 2.d0*work(i, j)) + total
         end do
      end do
      call finish(rho, temp, work(1, 2), n)
      return
      end
`;
    }
    writeFileSync(join(root, `part${file}.f`), text);
  }
  return root;
}

const root = process.env.MORTISE_FORTRAN_SOURCE ?? generated();
const paths = readdirSync(root, { recursive: true })
  .map((one) => join(root, String(one)))
  .filter((path) => /\.(?:f|for|f77|f90|f95)$/i.test(path) && statSync(path).isFile());
const sources = paths.map((path) => ({ path, bytes: new Uint8Array(readFileSync(path)) }));
const megabytes = sources.reduce((sum, { bytes }) => sum + bytes.length, 0) / 1e6;
const few = { iterations: 3, warmupIterations: 1, time: 0, warmupTime: 0 };
const once = { iterations: 1, warmupIterations: 0, time: 0, warmupTime: 0 };

function run(program: string, words: readonly string[]): void {
  // A compiler says no to files whose modules are not there; the time is what counts.
  for (let at = 0; at < words.length; at += 200)
    spawnSync(
      program,
      program === 'cat' ? words.slice(at, at + 200) : ['-fsyntax-only', '-w', ...words.slice(at, at + 200)],
      {
        cwd: folder,
        stdio: 'ignore',
      },
    );
}

describeWith(['gfortran'], `${megabytes.toFixed(1)} MB of Fortran in ${paths.length} files`, () => {
  bench('floor: cat to /dev/null', () => run('cat', paths), few);
  bench(
    'read, one thread',
    () => {
      for (const { path, bytes } of sources) readFortran(path, bytes);
    },
    few,
  );
  bench(
    'cut into units with their ids',
    () => {
      for (const { path, bytes } of sources) fortranUnits(path, bytes);
    },
    few,
  );
  bench('floor: gfortran -fsyntax-only over the same files', () => run('gfortran', paths), once);
});

describeWith([], 'twenty versions of each file, one unit changed each time', () => {
  const versions = sources.slice(0, 60).flatMap(({ path, bytes }) => {
    const units = fortranUnits(path, bytes);
    const extra = new TextEncoder().encode('! changed\n');
    return Array.from({ length: 20 }, (_, version) => {
      const at = units[version % units.length]!.from;
      return {
        path,
        bytes: Buffer.concat([bytes.subarray(0, at), extra, Buffer.from(`! ${version}\n`), bytes.subarray(at)]),
      };
    });
  });
  bench(
    'whole files',
    () => {
      for (const { path, bytes } of versions) readFortran(path, bytes);
    },
    few,
  );
  bench(
    'each distinct unit once, not joined',
    () => {
      const kept = new Map<string, FileInterface>();
      for (const { path, bytes } of versions)
        for (const unit of fortranUnits(path, bytes))
          if (!kept.has(unit.id)) kept.set(unit.id, readFortranUnit(path, bytes, unit));
    },
    few,
  );
  bench(
    'each distinct unit once, files joined',
    () => {
      const kept = new Map<string, FileInterface>();
      for (const { path, bytes } of versions) {
        const units = fortranUnits(path, bytes);
        joinFortranUnits(
          units,
          units.map((unit) => {
            const known = kept.get(unit.id) ?? readFortranUnit(path, bytes, unit);
            kept.set(unit.id, known);
            return known;
          }),
        );
      }
    },
    few,
  );
});

import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openOutput } from '../../src/outputs/open-output.edge.ts';
import { describeWith } from '../support/tools.ts';

let folder = '';
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'mortise-records-'));
});
afterAll(() => rmSync(folder, { recursive: true, force: true }));

const PROGRAM = `
program write_records
  implicit none
  integer :: i
  real(8) :: rho(5) = [1d-24, 2d-24, 3d-24, 4d-24, 5d-24]
  real(4) :: t(4) = [10., 20., 30., 40.]
  integer :: steps(3) = [1, 2, 3]
  open(10, file='little.bin', form='unformatted')
  open(11, file='big.bin', form='unformatted', convert='big_endian')
  do i = 10, 11
    write(i) steps
    write(i) rho
    write(i) rho * 2
    write(i) t
    close(i)
  end do
end program
`;

describeWith(['gfortran'], 'unformatted records written by gfortran', () => {
  beforeAll(() => {
    writeFileSync(join(folder, 'write.f90'), PROGRAM);
    const run = (...words: string[]) => execFileSync(words[0]!, words.slice(1), { cwd: folder });
    run('gfortran', '-o', 'write', 'write.f90');
    run('./write');
    run('gfortran', '-frecord-marker=8', '-o', 'write8', 'write.f90');
    for (const name of ['little', 'big']) run('mv', `${name}.bin`, `${name}4.bin`);
    run('./write8');
    // Subrecords of 16 bytes: what happens beyond 2 GiB.
    run('gfortran', '-fmax-subrecord-length=16', '-o', 'split', 'write.f90');
    for (const name of ['little', 'big']) run('mv', `${name}.bin`, `${name}8.bin`);
    run('./split');
  });

  const rho = [1e-24, 2e-24, 3e-24, 4e-24, 5e-24];
  for (const name of ['little4', 'big4', 'little8', 'big8', 'little', 'big']) {
    it(`are read with markers as in ${name}.bin, equal records together, types judged`, async () => {
      const file = await openOutput(join(folder, `${name}.bin`));
      const found = file.datasets().map((info) => [info.name, info.type, info.shape]);
      expect(found).toEqual([
        ['record 1', 'int32', [3]],
        ['records 2 to 3', 'float64', [2, 5]],
        ['record 4', 'float32', [4]],
      ]);
      expect([...(await file.readAll('records 2 to 3'))]).toEqual([...rho, ...rho.map((value) => value * 2)]);
      expect([...(await file.readAll('record 4'))]).toEqual([10, 20, 30, 40]);
      file.close();
    });
  }

  it('are read by a declared layout over record boundaries', async () => {
    const arrays = [
      { name: 'steps', type: 'int32', shape: [3] },
      { name: 'rho', type: 'float64', shape: [10], unit: 'g/cm3' },
      { name: 't', type: 'float32', shape: [4] },
    ];
    const file = await openOutput(join(folder, 'big4.bin'), { layout: { arrays } });
    expect([...(await file.readAll('rho'))]).toEqual([...rho, ...rho.map((value) => value * 2)]);
    file.close();
  });

  it('say where they are cut short', async () => {
    const bytes = readFileSync(join(folder, 'little4.bin'));
    writeFileSync(join(folder, 'cut.bin'), bytes.subarray(0, 50));
    await expect(openOutput(join(folder, 'cut.bin'))).rejects.toMatchObject({
      kind: 'truncated',
      message: 'ends at byte 50, inside record 2, which starts at byte 20 and holds 40 bytes',
    });
  });
});

describe('a record judged by its bytes', () => {
  it('keeps NaN and infinities among likely numbers', async () => {
    const body = Buffer.from(Float64Array.of(1, Number.NaN, 3, Number.POSITIVE_INFINITY, 5, 6).buffer);
    const marker = Buffer.alloc(4);
    marker.writeInt32LE(body.length);
    writeFileSync(join(folder, 'nan.bin'), Buffer.concat([marker, body, marker]));
    const file = await openOutput(join(folder, 'nan.bin'));
    expect([...(await file.readAll('record 1'))]).toEqual([1, Number.NaN, 3, Number.POSITIVE_INFINITY, 5, 6]);
    file.close();
  });
});

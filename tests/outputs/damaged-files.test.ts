// Files of every binary format with bytes changed at random: each is read, or refused with a reason; nothing else happens.
import { execFileSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { openOutput } from '../../src/outputs/open-output.edge.ts';
import { OutputProblem } from '../../src/outputs/output-file.ts';
import { describeWith, PYTHON } from '../support/tools.ts';

const WRITE = `
import sys, os
import numpy as np, h5py, netCDF4
from astropy.io import fits
os.chdir(sys.argv[1])
x = np.arange(60.0).reshape(12, 5)
np.save('a.npy', x)
np.savez_compressed('a.npz', x=x, y=x[0])
with h5py.File('a.h5', 'w') as f:
    f['plain'] = x; f['plain'].attrs['units'] = 'K'
    f.create_dataset('group/packed', data=x, chunks=(4, 5), compression='gzip')
for form in ['NETCDF3_CLASSIC', 'NETCDF3_64BIT_DATA']:
    with netCDF4.Dataset(form + '.nc', 'w', format=form) as d:
        d.createDimension('t', None); d.createDimension('x', 5)
        d.createVariable('rho', 'f8', ('t', 'x'))[:] = x
        d.createVariable('t', 'i4', ('t',))[:] = np.arange(12)
fits.HDUList([fits.PrimaryHDU(x), fits.BinTableHDU.from_columns([fits.Column('x', 'D', array=x[:, 0])])]).writeto('a.fits')
`;

describeWith(['python3:h5py', 'python3:netCDF4', 'python3:astropy'], 'a damaged file', () => {
  let folder = '';
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'mortise-damaged-'));
    execFileSync(PYTHON, ['-c', WRITE, folder]);
  });
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  it('is read or refused with a reason, whatever its bytes', async () => {
    const sound = readdirSync(folder).map((name) => ({ name, bytes: readFileSync(join(folder, name)) }));
    expect(sound).toHaveLength(6);
    let refused = 0;
    const damage = fc.array(fc.tuple(fc.nat(1 << 20), fc.nat(255)), {
      minLength: 1,
      maxLength: 6,
    });
    await fc.assert(
      fc.asyncProperty(fc.constantFrom(...sound), damage, async ({ bytes }, changes) => {
        const broken = Buffer.from(bytes);
        // The signature stays: without it the bytes are taken for plain numbers.
        for (const [where, value] of changes) broken[8 + (where % (bytes.length - 8))] = value;
        const path = join(folder, 'broken');
        writeFileSync(path, broken);
        try {
          const file = await openOutput(path);
          try {
            for (const info of file.datasets()) {
              let length = 0;
              // A shape may claim any size, and HDF5 fills what was never written.
              for await (const piece of file.read(info.name)) {
                length += piece.length;
                if (length > 1e6) break;
              }
              expect(length).toBeGreaterThanOrEqual(0);
            }
          } finally {
            file.close();
          }
        } catch (error) {
          if (!(error instanceof OutputProblem)) throw error;
          expect(error.message).not.toBe('');
          refused++;
        }
      }),
      // The same damage every time: the library behind HDF5 may take minutes over an unlucky one.
      { numRuns: 800, seed: 2026 },
    );
    expect(refused).toBeGreaterThan(50);
  });
});

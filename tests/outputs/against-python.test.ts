// Files written by the libraries that simulation codes and their analysis use; what those libraries read back is the judge.
import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { openOutput } from '../../src/outputs/open-output.edge.ts';
import { describeWith, PYTHON } from '../support/tools.ts';

/** Writes each array under a name, and what the writing library reads back to `expected/`, as raw doubles. */
const WRITE = `
import os, sys, json
import numpy as np
os.chdir(sys.argv[1]); os.mkdir('expected')
rng = np.random.default_rng(7)
index = []
def expect(file, dataset, values, unit=None, shape=None, fill=None):
    values = np.asarray(values)
    shape = list(values.shape) if shape is None else shape
    if np.iscomplexobj(values):
        flat = np.stack([values.real, values.imag], axis=-1)
    else:
        flat = values
    name = 'expected/%d' % len(index)
    np.ascontiguousarray(flat).astype('<f8').tofile(name)
    index.append(dict(file=file, dataset=dataset, expected=name, unit=unit, shape=shape, fill=fill))
field = rng.standard_normal((37, 5, 11)) * 10.0 ** rng.integers(-30, 30, (37, 5, 11))
`;

const PARTS: Readonly<Record<string, string>> = {
  numpy: `
for kind in ['<f8', '>f8', '<f4', '>f4', '<f2', 'i1', 'u1', '<i2', '>i4', '<u4', '<i8', '>u8', '<c16', '>c8']:
    if kind[-2] in 'iu': values = rng.integers(0, 100, (6, 7)).astype(kind)
    elif 'c' in kind: values = (rng.standard_normal((6, 7)) + 1j * rng.standard_normal((6, 7))).astype(kind)
    else: values = rng.standard_normal((6, 7)).astype(kind)
    name = 'a_%s.npy' % kind.strip('<>') if kind[0] == '<' else 'b_%s.npy' % kind.strip('<>')
    np.save(name, values)
    expect(name, 'array', np.load(name))
np.save('scalar.npy', np.float64(3.25)); expect('scalar.npy', 'array', 3.25)
np.savez('plain.npz', density=field, words=np.array(['a', 'b'])); expect('plain.npz', 'density', field)
np.savez_compressed('small.npz', density=field, t=np.arange(4)); expect('small.npz', 'density', field); expect('small.npz', 't', np.arange(4))
field.tofile('raw.bin')
`,
  h5py: `
import h5py
with h5py.File('a.h5', 'w') as f:
    f['plain'] = field
    f['plain'].attrs['units'] = 'erg/g'
    f.create_dataset('gas/packed', data=field, chunks=(7, 5, 3), compression='gzip', shuffle=True)
    f.create_dataset('gas/single', data=field.astype('>f4'))
    f.create_dataset('ids', data=np.arange(1000, dtype='i8'), maxshape=(None,), chunks=(64,))
    f['wave'] = np.exp(1j * np.arange(9.0))
    f['scalar'] = 2.5
    f['words'] = ['a', 'b']
    f['empty'] = np.zeros((0, 3))
    f['zones'] = np.array([(1.5, 2), (2.5, 3)], dtype=[('mass', 'f8'), ('zone', 'i4')])
    f['again'] = h5py.SoftLink('/gas/single')
    f.create_dataset('large', data=rng.standard_normal((3, 700, 701)))
with h5py.File('a.h5') as f:
    expect('a.h5', '/plain', f['plain'][()], unit='erg/g')
    for name in ['gas/packed', 'gas/single', 'ids', 'scalar', 'large', 'again']: expect('a.h5', '/' + name, f[name][()])
    expect('a.h5', '/wave', f['wave'][()])
    expect('a.h5', '/zones.mass', f['zones']['mass'])
    expect('a.h5', 'zones.zone', f['zones']['zone'])
`,
  netCDF4: `
import netCDF4
for form in ['NETCDF3_CLASSIC', 'NETCDF3_64BIT_OFFSET', 'NETCDF3_64BIT_DATA', 'NETCDF4']:
    name = form + '.nc'
    with netCDF4.Dataset(name, 'w', format=form) as d:
        d.createDimension('time', None); d.createDimension('x', 11); d.createDimension('y', 5)
        d.title = 'a title'
        t = d.createVariable('time', 'f8', ('time',)); t.units = 's'
        rho = d.createVariable('rho', 'f8', ('time', 'y', 'x')); rho.units = 'g/cm3'
        short = d.createVariable('short', 'i2', ('time', 'x'), fill_value=-999); short.scale_factor = 0.5; short.add_offset = 100.0
        odd = d.createVariable('odd', 'i1', ('time',))
        fixed = d.createVariable('fixed', 'f4', ('x',))
        t[:] = np.arange(37.0) * 0.1
        rho[:] = field
        packed = np.ma.masked_array(rng.integers(0, 50, (37, 11)) * 0.5 + 100, mask=False); packed[3, 4] = np.ma.masked
        short[:] = packed
        odd[:] = np.arange(37) % 100
        fixed[:] = np.linspace(0, 1, 11)
    with netCDF4.Dataset(name) as d:
        dot = '/' if form == 'NETCDF4' else ''
        expect(name, dot + 'time', d['time'][:], unit='s')
        expect(name, dot + 'rho', d['rho'][:], unit='g/cm3')
        expect(name, dot + 'short', d['short'][:].filled(-999 * 0.5 + 100.0), fill=-999 * 0.5 + 100.0)
        expect(name, dot + 'odd', d['odd'][:])
        expect(name, dot + 'fixed', d['fixed'][:])
with netCDF4.Dataset('one.nc', 'w', format='NETCDF3_CLASSIC') as d:
    d.createDimension('time', None)
    d.createVariable('only', 'i2', ('time',))[:] = np.arange(13)
expect('one.nc', 'only', np.arange(13))
`,
  astropy: `
from astropy.io import fits
from astropy.table import Table
image = fits.ImageHDU(field.astype('>f4'), name='DENSITY'); image.header['BUNIT'] = 'g/cm3'
scaled = fits.ImageHDU(np.arange(20, dtype='u2').reshape(4, 5), name='COUNTS')
long = fits.BinTableHDU.from_columns([
    fits.Column('x', 'D', unit='cm', array=np.linspace(0, 1, 3000)),
    fits.Column('name', '5A', array=['abc'] * 3000),
    fits.Column('flags', '3L', array=np.ones((3000, 3), bool)),
    fits.Column('v', '3E', unit='cm/s', array=rng.standard_normal((3000, 3)).astype('f4')),
    fits.Column('n', 'J', array=np.arange(3000)),
    fits.Column('z', 'M', array=np.exp(1j * np.arange(3000.0))),
], name='ZONES')
text = fits.TableHDU.from_columns([fits.Column('a', 'E15.7', unit='K', array=np.array([1.5, -2.5e10, 3e-10])), fits.Column('k', 'I10', array=np.array([1, 2, 3]))], name='TEXT')
fits.HDUList([fits.PrimaryHDU(np.arange(6.0).reshape(2, 3)), image, scaled, long, text]).writeto('a.fits')
with fits.open('a.fits') as f:
    expect('a.fits', 'primary', f[0].data)
    expect('a.fits', 'DENSITY', f['DENSITY'].data, unit='g/cm3')
    expect('a.fits', 'COUNTS', f['COUNTS'].data)
    for name, unit in [('x', 'cm'), ('v', 'cm/s'), ('n', None), ('z', None)]:
        expect('a.fits', 'ZONES.' + name, f['ZONES'].data[name], unit=unit)
    expect('a.fits', 'TEXT.a', f['TEXT'].data['a'], unit='K')
    expect('a.fits', 'TEXT.k', f['TEXT'].data['k'])
`,
};

interface Expected {
  readonly file: string;
  readonly dataset: string;
  readonly expected: string;
  readonly unit: string | null;
  readonly shape: number[];
  readonly fill: number | null;
}

for (const [library, script] of Object.entries(PARTS)) {
  describeWith(['python3:numpy', `python3:${library}`], `files written by ${library}`, () => {
    let folder = '';
    let index: Expected[] = [];
    beforeAll(() => {
      folder = mkdtempSync(join(tmpdir(), 'mortise-outputs-'));
      execFileSync(PYTHON, ['-c', `${WRITE}${script}\njson.dump(index, open('index.json', 'w'))`, folder]);
      index = JSON.parse(readFileSync(join(folder, 'index.json'), 'utf8'));
    });
    afterAll(() => rmSync(folder, { recursive: true, force: true }));

    it('are read to the last bit, with shape, unit and fill value', async () => {
      expect(index.length).toBeGreaterThan(5);
      for (const one of index) {
        const file = await openOutput(join(folder, one.file));
        const info = file.find(one.dataset);
        const label = `${one.file} ${one.dataset}`;
        expect(info?.shape, label).toEqual(one.shape);
        if (one.unit !== null) expect(info?.unit, label).toBe(one.unit);
        if (one.fill !== null) expect(info?.fill, label).toBe(one.fill);
        const bytes = readFileSync(join(folder, one.expected));
        const want = new Float64Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.length));
        expect(sameBits(await file.readAll(one.dataset), want), label).toBe(true);
        let at = 0;
        for await (const piece of file.read(one.dataset)) {
          expect(sameBits(piece, want.subarray(at, at + piece.length)), `${label} in pieces`).toBe(true);
          at += piece.length;
        }
        expect(at, label).toBe(want.length);
        file.close();
      }
    });

    it('are said to be cut short when their end is missing', async () => {
      for (const name of new Set(index.map((one) => one.file))) {
        const bytes = readFileSync(join(folder, name));
        for (const share of [0.5, 0.9]) {
          const cut = join(folder, `cut-${name}`);
          writeFileSync(cut, bytes.subarray(0, Math.floor(bytes.length * share)));
          const read = async () => {
            const file = await openOutput(cut);
            for (const info of file.datasets()) await file.readAll(info.name);
          };
          await expect(read(), `${name} at ${share}`).rejects.toThrow(/ends at byte|cut short|directory/);
        }
      }
    });
  });
}

function sameBits(a: Float64Array, b: Float64Array): boolean {
  return Buffer.from(a.buffer, a.byteOffset, a.byteLength).equals(Buffer.from(b.buffer, b.byteOffset, b.byteLength));
}

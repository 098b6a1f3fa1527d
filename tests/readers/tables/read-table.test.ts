// Tables written by the libraries of the trade: what those libraries say of their own files is the judge.
import { execFileSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Dataset, FileInterface } from '../../../src/model/interface.ts';
import { readSource } from '../../../src/readers/read-source.ts';
import { readTable, readTableFile } from '../../../src/readers/tables/read-table.ts';
import { describeWith, PYTHON } from '../../support/tools.ts';

const WRITE = `
import os, sys, json
import numpy as np, h5py, netCDF4
os.chdir(sys.argv[1])
logt = np.linspace(3.0, 9.0, 61)
rho = np.logspace(-12, -2, 41)
ye = np.array([0.05, 0.1, 0.2, 0.35, 0.5])
pressure = rho[:, None, None] * 10 ** logt[None, :, None] * ye
str_t = h5py.string_dtype()
with h5py.File('eos.h5', 'w') as f:
    f.attrs['version'] = '3.1.0'
    f.attrs['atomic_mass_unit'] = 1.66053906660e-24
    f.attrs['shape'] = np.array([41, 61, 5])
    g = f.create_group('axes')
    g.attrs['energy_shift'] = -1.9e19
    g['logtemp'] = logt; g['logtemp'].attrs['units'] = 'log10(K)'; g['logtemp'].attrs['long_name'] = 'logarithm of temperature'
    g['rho'] = rho; g['rho'].attrs['units'] = 'g/cm3'
    g['ye'] = ye.astype('f4')
    f.create_dataset('pressure', data=pressure, chunks=(10, 10, 5), compression='gzip')
    f['pressure'].attrs['units'] = np.bytes_('dyn/cm2'); f['pressure'].attrs['valid_range'] = np.array([0.0, 1e30])
    f['pressure'].attrs.create('remark', 'total pressure', dtype=str_t)
    for kind in ['f2', 'i1', 'u2', '>i4', 'u8', 'c16']: f['kinds/' + kind.strip('>')] = np.arange(6).reshape(2, 3).astype(kind)
    f['ntemp'] = 61
    f['species'] = ['h1', 'he4']
    f['loop'] = h5py.SoftLink('/axes')
    f['elsewhere'] = h5py.ExternalLink('/etc/hostname', '/')
with h5py.File('scales.h5', 'w') as f:
    f['x'] = np.array([1.0, 2.0, 5.0]); f['x'].make_scale('position')
    f['y'] = np.array([7.0, 8.0, 10.0])
    f['f'] = np.array([3.0, 1.0, 2.0]); f['f'].dims[0].attach_scale(f['x'])
for form in ['NETCDF3_CLASSIC', 'NETCDF3_64BIT_OFFSET', 'NETCDF3_64BIT_DATA', 'NETCDF4']:
    with netCDF4.Dataset(form + '.nc', 'w', format=form) as d:
        d.title = 'an opacity table'; d.hydrogen_fraction = 0.7
        d.createDimension('t', 61); d.createDimension('r', 41); d.createDimension('n', 3); d.createDimension('time', None); d.createDimension('bare', 2)
        t = d.createVariable('t', 'f8', ('t',)); t.units = 'K'; t[:] = 10 ** logt
        r = d.createVariable('r', 'f4', ('r',)); r.units = 'g cm-3'; r[:] = rho[::-1]
        k = d.createVariable('kappa', 'f4', ('t', 'r'), fill_value=-1.0); k.units = 'cm2/g'; k.long_name = 'Rosseland mean opacity'; k.factors = np.array([1.0, 2.5]); k[:] = 0.0
        i = d.createVariable('index', 'i4', ('n',)); i[:] = [3, 1, 2]
        b = d.createVariable('bare_one', 'i2', ('time', 'bare')); b[:] = np.zeros((4, 2))
        w = d.createVariable('who', 'S1', ('n',)); w[:] = np.array(['a', 'b', 'c'], dtype='S1')
np.save('a.npy', np.logspace(0, 4, 33)); np.save('field.npy', np.asfortranarray(np.zeros((4, 3, 2), '>f4')))
np.savez('two.npz', x=np.linspace(0, 1, 11), f=np.zeros((11, 4)), name=np.array(['q']))
np.savez_compressed('small.npz', x=np.arange(5, dtype='i8'), z=np.zeros(3, complex))

def plain(value):
    if isinstance(value, bytes): return value.decode()
    value = np.asarray(value)
    if value.dtype.kind in 'SUO': return ', '.join(v.decode() if isinstance(v, bytes) else str(v) for v in value.ravel())
    return value.ravel()[0].item() if value.size == 1 else value.ravel().tolist()
def entry(values, shape, dtype, attrs): return dict(type=dtype.name if dtype.kind in 'fiuc' else 'text', bytes=dtype.itemsize if dtype.kind in 'fiuc' else None, shape=list(shape), attributes={k: plain(v) for k, v in attrs.items()})
told = {}
for name in ['eos.h5', 'scales.h5']:
    with h5py.File(name) as f:
        found = {}
        def visit(path, it):
            if isinstance(it, h5py.Dataset): found['/' + path] = entry(it, it.shape, it.dtype, {k: v for k, v in it.attrs.items() if k not in ('CLASS', 'NAME', 'REFERENCE_LIST', 'DIMENSION_LIST')})
        f.visititems(visit); told[name] = found
for form in ['NETCDF3_CLASSIC', 'NETCDF3_64BIT_OFFSET', 'NETCDF3_64BIT_DATA', 'NETCDF4']:
    with netCDF4.Dataset(form + '.nc') as d:
        told[form + '.nc'] = {('/' if form == 'NETCDF4' else '') + k: entry(v, v.shape, v.dtype, {a: v.getncattr(a) for a in v.ncattrs()}) for k, v in d.variables.items()}
for name in ['a.npy', 'field.npy']: told[name] = {'array': entry(0, np.load(name).shape, np.load(name).dtype, {})}
for name in ['two.npz', 'small.npz']:
    with np.load(name) as z: told[name] = {k: entry(0, z[k].shape, z[k].dtype, {}) for k in z.files if z[k].dtype.kind != 'U'}
json.dump(told, open('told.json', 'w'))
`;

const TOOLS = ['python3:numpy', 'python3:h5py', 'python3:netCDF4'];

describeWith(TOOLS, 'tables written by h5py, netCDF4 and numpy', () => {
  let folder = '';
  let told: Record<
    string,
    Record<string, Pick<Dataset, 'type' | 'bytes' | 'shape'> & { attributes: Record<string, unknown> }>
  >;
  beforeAll(() => {
    folder = mkdtempSync(join(tmpdir(), 'mortise-tables-'));
    execFileSync(PYTHON, ['-c', WRITE, folder]);
    told = JSON.parse(readFileSync(join(folder, 'told.json'), 'utf8'));
  });
  afterAll(() => rmSync(folder, { recursive: true, force: true }));

  const bytesOf = (name: string) => new Uint8Array(readFileSync(join(folder, name)));
  const read = (name: string) => readSource(`tables/${name}`, bytesOf(name));
  const one = (from: FileInterface, name: string) => from.datasets.find((each) => each.name === name);

  it('have the data sets, types, bytes, shapes and attributes that the libraries give', async () => {
    for (const [name, expected] of Object.entries(told)) {
      const found = await read(name);
      // What is reached through a link as well is listed under both names; h5py visits each object once.
      const listed = found.datasets.filter((each) => !each.name.startsWith('/loop/'));
      expect({ name, sets: listed.map((each) => each.name).sort() }).toEqual({
        name,
        sets: Object.keys(expected).sort(),
      });
      for (const [set, { type, bytes, shape, attributes }] of Object.entries(expected)) {
        const mine = one(found, set)!;
        expect({ name, set, type: mine.type, bytes: mine.bytes, shape: mine.shape }).toEqual({
          name,
          set,
          type,
          bytes,
          shape,
        });
        const numbers = (value: unknown) => (Array.isArray(value) ? value.join(', ').replace(/\.0\b/g, '') : value);
        expect({ name, set, attributes: mine.attributes }).toEqual({
          name,
          set,
          attributes: Object.fromEntries(Object.entries(attributes).map(([key, value]) => [key, numbers(value)])),
        });
      }
    }
  });

  it('are read alike from bytes and from disk', async () => {
    for (const name of readdirSync(folder).filter((each) => each !== 'told.json'))
      expect({ name, ...(await readTableFile(join(folder, name))) }).toEqual({ name, ...(await read(name)) });
  });

  it('give axes with range, spacing and the base of stored logarithms', async () => {
    const eos = await read('eos.h5');
    expect(one(eos, '/axes/logtemp')!.axis).toEqual({
      first: 3,
      last: 9,
      spacing: 'linear',
      points: 61,
      logBase: '10',
    });
    expect(one(eos, '/axes/rho')!.axis).toMatchObject({ first: 1e-12, last: 1e-2, spacing: 'log', points: 41 });
    expect(one(eos, '/axes/ye')!.axis).toMatchObject({ spacing: 'uneven', points: 5 });
    expect(one(eos, '/pressure')!.axis).toBeUndefined();
    for (const form of ['NETCDF3_CLASSIC.nc', 'NETCDF4.nc']) {
      const dot = form === 'NETCDF4.nc' ? '/' : '';
      const opacity = await read(form);
      expect(one(opacity, `${dot}t`)!.axis).toMatchObject({ spacing: 'log', points: 61 });
      expect(one(opacity, `${dot}r`)!.axis).toMatchObject({ first: Math.fround(1e-2), spacing: 'log', points: 41 });
      expect(one(opacity, `${dot}index`)!.axis).toBeUndefined();
    }
    const scales = await read('scales.h5');
    expect(scales.datasets.map((each) => [each.name, each.axis?.points ?? null])).toEqual([
      ['/f', null],
      ['/x', 3],
      ['/y', null],
    ]);
    expect(one(await read('a.npy'), 'array')!.axis).toMatchObject({ first: 1, last: 1e4, spacing: 'log', points: 33 });
    expect(one(await read('two.npz'), 'x')!.axis).toMatchObject({ spacing: 'linear', points: 11 });
  });

  it('give what attributes claim, and the constants that they were made with', async () => {
    const eos = await read('eos.h5');
    expect(
      eos.claims.filter((each) => each.name === '/axes/logtemp').map((each) => [each.what, each.value, each.from]),
    ).toEqual([
      ['unit', 'log10(K)', 'attribute'],
      ['log-base', '10', 'attribute'],
    ]);
    expect(one(eos, '/pressure')!.unit).toBe('dyn/cm2');
    expect(eos.constants.map((each) => [each.parent, each.name, each.value])).toEqual([
      [null, 'atomic_mass_unit', 1.6605390666e-24],
      [null, 'shape', '41, 61, 5'],
      [null, 'version', '3.1.0'],
      ['/axes', 'energy_shift', -1.9e19],
      ['/loop', 'energy_shift', -1.9e19],
      [null, 'ntemp', 61],
    ]);
    const opacity = await read('NETCDF3_CLASSIC.nc');
    expect(opacity.constants.map((each) => [each.name, each.value])).toEqual([
      ['title', 'an opacity table'],
      ['hydrogen_fraction', 0.7],
    ]);
  });

  it('say what is wrong when they were cut short or altered, and never throw', async () => {
    for (const name of ['eos.h5', 'NETCDF3_CLASSIC.nc', 'a.npy', 'two.npz']) {
      const whole = bytesOf(name);
      const half = await readSource(`tables/${name}`, whole.subarray(0, Math.floor(whole.length * 0.6)));
      expect(half.incomplete[0]?.why).toMatch(/^the file /);
    }
    await fc.assert(
      fc.asyncProperty(
        fc.constantFrom('eos.h5', 'scales.h5', 'NETCDF3_64BIT_DATA.nc', 'field.npy', 'small.npz'),
        fc.array(fc.tuple(fc.nat(6000), fc.nat(255)), { minLength: 1, maxLength: 30 }),
        async (name, changes) => {
          const bytes = bytesOf(name);
          for (const [at, byte] of changes) bytes[at % bytes.length] = byte;
          const found = await readSource(`tables/${name}`, bytes);
          expect(found.incomplete.filter(({ why }) => why.startsWith('the reader failed'))).toEqual([]);
        },
      ),
      { numRuns: 60 },
    );
  });
});

describe('a table of text', () => {
  const read = (text: string, path = 'tables/t.dat') => readTable(path, new TextEncoder().encode(text));

  it('gives columns with units from its heading, where they stand, and the number of rows', async () => {
    const found = await read('# opacity of cold gas\n# T[K]  kappa[cm2/g]\n10 1.0\n20 0.5\n40 0.9\n80 0.1\n');
    expect(found.datasets).toEqual([
      {
        name: 'T',
        type: 'decimal',
        bytes: null,
        shape: [4],
        unit: 'K',
        attributes: {},
        axis: { first: 10, last: 80, spacing: 'log', points: 4 },
      },
      { name: 'kappa', type: 'decimal', bytes: null, shape: [4], unit: 'cm2/g', attributes: {} },
    ]);
    expect(found.claims.map((one) => [one.name, one.what, one.value, one.from, one.line, one.column])).toEqual([
      ['T', 'unit', 'K', 'bracket', 2, 3],
      ['kappa', 'unit', 'cm2/g', 'bracket', 2, 9],
    ]);
    expect(found.incomplete).toEqual([]);
  });

  it('finds the axes of a table over several variables that is written row by row', async () => {
    const [density, temperature] = [
      [1e-10, 1e-9, 1e-8],
      [4, 5, 6, 7, 8],
    ];
    const rows = density.flatMap((rho) => temperature.map((t) => `${rho},${t},${rho * 10 ** t}`));
    const found = await read(`rho [g/cm3],log10_T,p [dyn/cm2]\n${rows.join('\n')}\n`, 'eos.csv');
    expect(found.datasets.map((one) => one.axis)).toEqual([
      { first: 1e-10, last: 1e-8, spacing: 'log', points: 3 },
      { first: 4, last: 8, spacing: 'linear', points: 5, logBase: '10' },
      undefined,
    ]);
  });

  it('takes constants and claims from the remarks above it', async () => {
    const found = await read(
      '# m_b = 1.66054e-24 [g]\n# eps: internal energy relative to neutral atoms [erg/g]\n# rho eps\n1 3\n2 1\n3 2\n',
    );
    expect(found.constants.map((one) => [one.name, one.value, one.line])).toEqual([['m_b', 1.66054e-24, 1]]);
    expect(found.claims.map((one) => [one.name, one.what, one.value, one.line])).toContainEqual([
      'eps',
      'unit',
      'erg/g',
      2,
    ]);
    expect(found.claims.map((one) => [one.name, one.what, one.value, one.line])).toContainEqual([
      'm_b',
      'unit',
      'g',
      1,
    ]);
  });

  it('keeps what stands before a damaged row, and says where it is', async () => {
    const found = await read('x y\n1 2\n2 3\n3 oops\n4 5\n');
    expect(found.datasets.map((one) => [one.name, one.shape])).toEqual([
      ['x', [2]],
      ['y', [2]],
    ]);
    expect(found.incomplete).toEqual([{ line: 4, why: expect.stringContaining('no row of numbers: "3 oops"') }]);
  });

  it('says so when it is none', async () => {
    expect((await read('', 'empty.csv')).incomplete).toEqual([{ line: 1, why: expect.stringContaining('is empty') }]);
    expect((await read('&control\n  name\n/\n')).incomplete).toHaveLength(1);
  });

  it('gives a result for any bytes', async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.uint8Array({ maxLength: 400 }),
        fc.constantFrom('a.dat', 'a.csv', 'a.nc', 'a.h5', 'a.npz', 'a.meta', 'a.fits'),
        async (bytes, path) => {
          const found = await readTable(path, bytes);
          expect(found.language).toBe('table');
          expect(found.datasets.length + found.incomplete.length + found.constants.length).toBeGreaterThan(0);
        },
      ),
      { numRuns: 300 },
    );
  });
});

describe('a metadata table beside a procedure', () => {
  it('claims the unit and the shape of each argument', async () => {
    // The layout is the published one of CCPP, Technical Documentation, "Metadata Table Rules"; the content is our own.
    const text = `[ccpp-table-properties]
  name = cloud_micro
  type = scheme
  dependencies = machine.F
########################################################################
[ccpp-arg-table]
  name = cloud_micro_run
  type = scheme
[im]
  standard_name = horizontal_loop_extent
  units = count
  dimensions = ()
  type = integer
  intent = in
[Prsl]
  standard_name = air_pressure
  units = Pa
  dimensions = (horizontal_loop_extent,vertical_layer_dimension)
  type = real | kind = kind_phys
  intent = in
`;
    const found = await readSource('physics/cloud_micro.meta', new TextEncoder().encode(text));
    expect(
      found.claims.map(({ name, parent, what, value, from, line }) => [parent, name, what, value, from, line]),
    ).toEqual([
      ['cloud_micro_run', 'im', 'unit', 'count', 'metadata', 11],
      ['cloud_micro_run', 'prsl', 'unit', 'Pa', 'metadata', 17],
      ['cloud_micro_run', 'prsl', 'shape', '(horizontal_loop_extent,vertical_layer_dimension)', 'metadata', 18],
    ]);
    expect(found.incomplete).toEqual([]);
  });
});

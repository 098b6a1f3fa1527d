import { expect, it } from 'vitest';
import { moduleInterfaces } from '../../src/fit/module-interfaces.ts';
import { emptyInterface } from '../../src/model/interface.ts';
import type { SourceTree } from '../../src/sources/tree.ts';
import { bytes, load } from '../manifests/manifest-text.ts';

function tree(files: Readonly<Record<string, string>>): SourceTree {
  return {
    root: '/',
    revision: null,
    entries: async () => [],
    read: async (path) => (files[path] === undefined ? null : bytes(files[path])),
  };
}

it('every source file of the modules plugged in is read once, and what is not there is left out', async () => {
  const read: string[] = [];
  const found = await moduleInterfaces(load().set, tree({ 'src/hydro.ts': '', 'src/other.ts': '' }), async (path) => {
    read.push(path);
    return emptyInterface('typescript');
  });
  expect(read).toEqual(['src/hydro.ts']);
  expect([...found.keys()]).toEqual(['src/hydro.ts']);
});

it('files that are included are found beside the includer, from the root, and beside other modules, and never outside', async () => {
  const files = {
    'src/hydro.ts': 'hydro',
    'src/SIZE': 'size',
    PARAM: 'param',
    'src/eos/ionising.f90': 'eos',
    'src/eos/TABLE': 'table',
  };
  const seen = new Map<string, string | null>();
  await moduleInterfaces(load().set, tree(files), async (path, _, include) => {
    if (path === 'src/hydro.ts') {
      for (const name of ['SIZE', 'PARAM', 'TABLE', '../PARAM', '../../etc/passwd', '/etc/passwd', 'NONE']) {
        const got = include(name, path);
        seen.set(name, got === null ? null : new TextDecoder().decode(got));
      }
    }
    return emptyInterface('fortran');
  });
  expect(Object.fromEntries(seen)).toEqual({
    SIZE: 'size',
    PARAM: 'param',
    TABLE: 'table',
    '../PARAM': 'param',
    '../../etc/passwd': null,
    '/etc/passwd': null,
    NONE: null,
  });
});

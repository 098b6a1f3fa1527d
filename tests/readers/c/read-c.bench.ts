/**
 * The reader of C and C++ over the headers of the machine, everything it yields included, against two floors: the bytes through `cat`,
 * and `clang -fsyntax-only` over the headers of C that can be compiled by themselves.
 */
import { execFileSync, spawnSync } from 'node:child_process';
import { mkdtempSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { bench, describe } from 'vitest';
import { readC } from '../../../src/readers/c/read-c.ts';

const resources = execFileSync('clang', ['-print-resource-dir'], { encoding: 'utf8' }).trim();
const intrinsics = readdirSync(join(resources, 'include'))
  .filter((name) => /intrin\.h$/.test(name) && !/^arm|^mips|^vec/.test(name))
  .map((name) => join(resources, 'include', name));
const library = readdirSync('/usr/include/c++')
  .map((version) => join('/usr/include/c++', version, 'bits'))
  .flatMap((folder) => readdirSync(folder).map((name) => join(folder, name)))
  .filter((file) => statSync(file).isFile());

function loaded(files: readonly string[]) {
  return files.map((file) => [file, new Uint8Array(readFileSync(file))] as const);
}

const source = join(mkdtempSync(join(tmpdir(), 'mortise-bench-')), 'all.c');
writeFileSync(source, '#include <immintrin.h>\n');

for (const [what, files, language] of [
  ['C: the vector intrinsics of clang', intrinsics, 'c'],
  ['C++: the library of gcc', library, 'c++'],
] as const) {
  const read = loaded(files);
  const megabytes = read.reduce((sum, [, bytes]) => sum + bytes.length, 0) / 1e6;
  describe(`${what}, ${files.length} files, ${megabytes.toFixed(2)} MB`, () => {
    bench('floor: cat to /dev/null', () => {
      spawnSync('cat', files as string[], { stdio: ['ignore', 'ignore', 'ignore'] });
    });
    if (language === 'c')
      bench('floor: clang -fsyntax-only', () => {
        spawnSync('clang', ['-fsyntax-only', '-w', source]);
      });
    bench('read: procedures, types, calls, constants, claims', () => {
      for (const [file, bytes] of read) readC(file, bytes, { language });
    });
  });
}

/** The reader of Python over the library of the machine's Python, against `cat` and against Python's own `ast.parse` of the same files. */
import { execFileSync, spawnSync } from 'node:child_process';
import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { bench, describe } from 'vitest';
import { readPython } from '../../../src/readers/python/read-python.ts';
import { PYTHON } from '../../support/tools.ts';

const folder = execFileSync(PYTHON, ['-c', 'import os; print(os.path.dirname(os.__file__))'], {
  encoding: 'utf8',
}).trim();
const files = readdirSync(folder)
  .filter((name) => name.endsWith('.py'))
  .map((name) => join(folder, name));
const read = files.map((file) => [file, new Uint8Array(readFileSync(file))] as const);
const megabytes = read.reduce((sum, [, bytes]) => sum + bytes.length, 0) / 1e6;

describe(`Python: its own library, ${files.length} files, ${megabytes.toFixed(2)} MB`, () => {
  bench('floor: cat to /dev/null', () => {
    spawnSync('cat', files, { stdio: ['ignore', 'ignore', 'ignore'] });
  });
  bench('floor: ast.parse', () => {
    spawnSync(PYTHON, ['-c', 'import ast, sys\nfor f in sys.argv[1:]: ast.parse(open(f, "rb").read())', ...files]);
  });
  bench('read: procedures, types, calls, constants, claims', () => {
    for (const [file, bytes] of read) readPython(file, bytes);
  });
});

/**
 * Reading a whole history, against what git alone needs for the bare input of the same work: the log over the source paths and
 * a stream of all distinct blobs. Histories of 1,000 and 10,000 commits; 100,000 with MORTISE_BENCH_LONG=1.
 * Needs a build: threads run scripts from dist/.
 */
import { spawnSync } from 'node:child_process';
import { cpSync, existsSync } from 'node:fs';
import { bench, describe } from 'vitest';
import { builtAsset } from '../../src/sources/assets.edge.ts';
import { temporaryFolder } from '../sources/repositories.ts';
import { importHistory, type MadeCommit } from './fast-import.ts';

const once = { iterations: 3, warmupIterations: 0, time: 0, warmupTime: 0 };
const program = builtAsset('mortise.js');
if (!existsSync(program)) throw new Error('run "npm run build" first: the scan runs in threads of the bundled program');

for (const count of [1_000, 10_000, ...(process.env.MORTISE_BENCH_LONG === '1' ? [100_000] : [])]) {
  describe(`a history of ${count} commits`, () => {
    const root = importHistory(history(count));
    const cache = temporaryFolder();
    const before = temporaryFolder();
    run(root, program, cache, 'drift', 'main');
    run(root, program, before, 'drift', 'main~1');
    // Each measurement of one new commit begins with what was kept before it.
    const copies = Array.from({ length: once.iterations }, () => {
      const copy = temporaryFolder();
      cpSync(before, copy, { recursive: true });
      return copy;
    });

    bench('floor: git log of the source paths and all distinct blobs', () => void floor(root), once);
    bench('cold, nothing kept', () => void run(root, program, temporaryFolder(), 'drift', 'main'), once);
    bench('floor: node -e 0', () => void spawnSync(process.execPath, ['-e', '0']), once);
    bench('nothing new', () => void run(root, program, cache, 'drift', 'main'), once);
    bench('one new commit', () => void run(root, program, copies.pop() ?? cache, 'drift', 'main'), once);
  });
}

/** Ten files of ten routines; each commit changes one of them, every tenth an interface. */
function* history(count: number): Generator<MadeCommit> {
  const routines = Array.from({ length: 100 }, () => ({ version: 0, arguments: 1 }));
  const file = (place: number) =>
    routines
      .slice(place * 10, place * 10 + 10)
      .map(({ version, arguments: n }, at) => {
        const args = Array.from({ length: n }, (_, index) => `double x${index}`).join(', ');
        const work = Array.from(
          { length: 12 },
          (_, line) => `  s += x0 * ${line + version}.25 / (1.0 + ${line} * s);`,
        ).join('\n');
        return `/* temperature of zone ${at} [K] */\ndouble routine_${place}_${at}(${args})\n{\n  double s = ${version}.0;\n${work}\n  return s;\n}\n`;
      })
      .join('\n');
  const path = (place: number) => `src/part${place}.c`;
  yield {
    subject: 'begin',
    files: Object.fromEntries(Array.from({ length: 10 }, (_, place) => [path(place), file(place)])),
  };
  for (let commit = 1; commit < count; commit += 1) {
    const at = (commit * 37) % 100;
    routines[at]!.version += 1;
    if (commit % 10 === 0) routines[at]!.arguments = 1 + (routines[at]!.arguments % 5);
    const place = Math.floor(at / 10);
    yield { subject: `change ${commit}`, files: { [path(place)]: file(place) } };
  }
}

function floor(root: string): void {
  const log = spawnSync('sh', ['-c', "git log --raw --no-renames --no-abbrev --format=%H main -- '*.c' > log"], {
    cwd: root,
  });
  const blobs = spawnSync(
    'sh',
    ['-c', "awk '/^:/{print $4}' log | sort -u | git cat-file --batch --buffer > /dev/null; rm log"],
    { cwd: root },
  );
  if (log.status !== 0 || blobs.status !== 0) throw new Error('git failed');
}

function run(cwd: string, script: string, cache: string, ...words: string[]): void {
  const done = spawnSync(process.execPath, [script, ...words], {
    cwd,
    env: { ...process.env, XDG_CACHE_HOME: cache },
    maxBuffer: 1 << 28,
  });
  if (done.status !== 0 && done.status !== 1) throw new Error(done.stderr.toString());
}

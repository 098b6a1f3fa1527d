/**
 * The static review of one commit on a code of 300 files and 2,000 commits, against `git diff --stat` of the same range and the
 * start of Node. Needs a build: the program is started as a whole.
 */
import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { bench, describe } from 'vitest';
import { builtAsset } from '../../src/sources/assets.edge.ts';
import { importHistory, type MadeCommit } from '../history/fast-import.ts';
import { temporaryFolder } from '../sources/repositories.ts';

const FILES = 300;
const COMMITS = 2_000;
const many = { iterations: 8, warmupIterations: 1, time: 0, warmupTime: 0 };
const program = builtAsset('mortise.js');
if (!existsSync(program)) throw new Error('run "npm run build" first: the bundled program is measured');

describe(`one commit of ${COMMITS} on ${FILES} files`, () => {
  const root = importHistory(history());
  const cache = temporaryFolder();

  bench(
    'floor: git diff --stat and the start of Node',
    () => {
      run('git', ['diff', '--stat', 'main~1..main'], cache);
      run(process.execPath, ['-e', '0'], cache);
    },
    many,
  );
  bench('warm', () => run(process.execPath, [program, 'review', 'main~1..main', '--no-run'], cache), many);
  bench(
    'cold, nothing kept',
    () => run(process.execPath, [program, 'review', 'main~1..main', '--no-run'], temporaryFolder()),
    many,
  );

  function run(file: string, words: readonly string[], kept: string): void {
    const done = spawnSync(file, words, { cwd: root, env: { ...process.env, XDG_CACHE_HOME: kept } });
    if (done.status !== 0 && done.status !== 1) throw new Error(done.stderr.toString());
  }
});

/** Files of one routine each that call the next; the last commit changes an interface. */
function* history(): Generator<MadeCommit> {
  const file = (place: number, version: number, more = '') => {
    const work = Array.from({ length: 60 }, (_, line) => `  s += x * ${line + version}.25 / (1.0 + ${line} * s);`).join(
      '\n',
    );
    return `/* rate of zone ${place} [1/s] */\ndouble rate_${place}(double x${more})\n{\n  double s = ${version}.0;\n${work}\n  return s + rate_${(place + 1) % FILES}(x);\n}\n`;
  };
  const path = (place: number) => `src/part${place % 10}/rate${place}.c`;
  yield {
    subject: 'begin',
    files: Object.fromEntries(Array.from({ length: FILES }, (_, place) => [path(place), file(place, 0)])),
  };
  for (let commit = 1; commit < COMMITS - 1; commit += 1) {
    const place = (commit * 37) % FILES;
    yield { subject: `change ${commit}`, files: { [path(place)]: file(place, commit) } };
  }
  yield { subject: 'change an interface', files: { [path(7)]: file(7, 1, ', double y') } };
}

/** Adds entries to a register as fast as it can, and says the seal of each once it is acknowledged: `FOLDER ENTRIES THREADS`. */
import { writeSync } from 'node:fs';
import { isMainThread, Worker, workerData } from 'node:worker_threads';
import { Register } from '../../src/register/register.edge.ts';
import { sampleContent } from './sample-entry.ts';

const [folder, count, threads] = (isMainThread ? process.argv.slice(2) : (workerData as string[])) as [
  string,
  string,
  string,
];
if (isMainThread && Number(threads) > 1) {
  for (let thread = 0; thread < Number(threads); thread++)
    new Worker(new URL(import.meta.url), { workerData: [folder, count, '1'] });
} else {
  for (let entry = 0; entry < Number(count); entry++) {
    const register = new Register(folder);
    const { seal } = register.add({ kind: 'entry', by: { name: 'R. Vale' }, title: 'Figure', content: sampleContent });
    // Straight to the pipe: what was said before a kill has left this process.
    writeSync(1, `${seal}\n`);
  }
}

/** Parses one table for measure-together.edge.ts, a few blocks ahead of the thread that measures. */
import { parentPort, workerData } from 'node:worker_threads';
import { openOutput } from '../outputs/open-output.edge.ts';
import { OutputProblem } from '../outputs/output-file.ts';
import { BLOCK } from './measure-block.ts';
import type { RowsMessage, RowsTask } from './measure-together.edge.ts';

const { path, names, hints, progress, ahead } = workerData as RowsTask;
const [SENT, TAKEN] = [0, 1];
const counters = new Int32Array(progress);
const send = (message: RowsMessage, transfer: ArrayBuffer[] = []) => parentPort!.postMessage(message, transfer);

try {
  const file = await openOutput(path, hints);
  const table = file.table(names)!;
  for (let count = BLOCK; count === BLOCK; ) {
    const taken = Atomics.load(counters, TAKEN);
    if (Atomics.load(counters, SENT) - taken >= ahead) {
      Atomics.wait(counters, TAKEN, taken);
      continue;
    }
    const columns = names.map(() => new Float64Array(BLOCK));
    count = table.fill(columns);
    Atomics.add(counters, SENT, 1);
    send(
      { count, columns },
      columns.map((column) => column.buffer),
    );
  }
  file.close();
} catch (error) {
  if (!(error instanceof OutputProblem)) throw error;
  send({ problem: { kind: error.kind, path: error.path, says: error.message } });
}

/** One more thread for measure-together.edge.ts: opens the same two data sets and takes stretches of them until none is left. */
import { parentPort, workerData } from 'node:worker_threads';
import { openOutput } from '../outputs/open-output.edge.ts';
import { measureKernel } from './measure-kernel.edge.ts';
import { measureSegments } from './measure-segments.ts';
import type { ThreadTask } from './measure-together.edge.ts';

const { reference, result, hints, work } = workerData as ThreadTask;
const [a, b] = [await openOutput(reference.path, hints), await openOutput(result.path, hints)];
const found = await measureSegments(
  work,
  a.cursor(reference.name),
  b.cursor(result.name),
  measureKernel(),
  async () => {},
);
a.close();
b.close();
parentPort!.postMessage(found);

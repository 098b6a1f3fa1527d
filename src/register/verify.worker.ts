/** Reads and checks a share of the record files; what the chain needs of each goes back. */
import { parentPort, workerData } from 'node:worker_threads';
import { checkRecords } from './verify.edge.ts';

const { folder, files } = workerData as { folder: string; files: string[] };
parentPort?.postMessage(checkRecords(folder, files));

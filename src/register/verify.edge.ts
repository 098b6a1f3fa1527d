/** Every record of the register, whole: read, its seal made again, the chain walked. No index is asked. */
import { existsSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { Worker } from 'node:worker_threads';
import { type Finding, sortFindings } from '../model/finding.ts';
import { builtAsset } from '../sources/assets.edge.ts';
import { chain, headOf, type RecordHead } from './chain.ts';
import { readRecord } from './read-record.ts';
import { listRecordFiles, readRecordBytes } from './register-files.edge.ts';

export interface Checked {
  readonly heads: RecordHead[];
  readonly findings: Finding[];
}

export interface Verified {
  readonly records: number;
  readonly findings: readonly Finding[];
}

// Below this many records a second thread costs more than it saves.
const FILES_A_WORKER = 2_000;

export async function verifyRegister(folder: string): Promise<Verified> {
  const files = listRecordFiles(folder);
  const script = builtAsset('verify.worker.js');
  const workers = existsSync(script)
    ? Math.min(availableParallelism(), 8, Math.floor(files.length / FILES_A_WORKER))
    : 0;
  const shares =
    workers < 2
      ? [checkRecords(folder, files)]
      : await Promise.all(
          Array.from({ length: workers }, (_, share) => {
            const [from, to] = [share, share + 1].map((edge) => Math.floor((edge * files.length) / workers));
            return checkInWorker(script, folder, files.slice(from, to));
          }),
        );
  const heads = shares.flatMap((one) => one.heads);
  return {
    records: files.length,
    findings: sortFindings([...shares.flatMap((one) => one.findings), ...chain(heads).findings]),
  };
}

export function checkRecords(folder: string, files: readonly string[]): Checked {
  const heads: RecordHead[] = [];
  const findings: Finding[] = [];
  for (const file of files) {
    const read = readRecord(file, readRecordBytes(folder, file));
    findings.push(...read.findings);
    const head = headOf(read);
    if (head !== null) heads.push(head);
  }
  return { heads, findings };
}

function checkInWorker(script: string, folder: string, files: string[]): Promise<Checked> {
  return new Promise((resolve, reject) => {
    const worker = new Worker(script, { workerData: { folder, files } });
    worker.once('message', resolve);
    worker.once('error', reject);
    worker.once('exit', (code) => {
      if (code !== 0) reject(new Error(`a thread that verifies records ended with ${code}`));
    });
  });
}

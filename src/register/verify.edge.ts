/** Every record of the register, whole: read, its seal made again, the chain walked. No index is asked. */
import { createHash } from 'node:crypto';
import { createReadStream, existsSync, statSync } from 'node:fs';
import { availableParallelism } from 'node:os';
import { basename, join } from 'node:path';
import { Worker } from 'node:worker_threads';
import { type Finding, sortFindings } from '../model/finding.ts';
import { printable } from '../model/printable.ts';
import { builtAsset } from '../sources/assets.edge.ts';
import { checkSignature } from '../sources/ssh-signature.edge.ts';
import { chain, headOf, type RecordHead } from './chain.ts';
import { readRecord } from './read-record.ts';
import type { Entry, Seal } from './record.ts';
import { listRecordFiles, readRecordBytes } from './register-files.edge.ts';

export interface Checked {
  readonly heads: RecordHead[];
  readonly findings: Finding[];
  readonly signed: Signed[];
  readonly naming: Naming[];
}

/** Inputs and outputs that a record names. */
interface Naming {
  readonly file: string;
  readonly seal: string;
  readonly digests: readonly { readonly name: string; readonly digest: string; readonly kept?: string }[];
}

/** A record whose seal is as it should be, and the signature over it. */
interface Signed {
  readonly file: string;
  readonly seal: string;
  readonly signature: string;
}

export interface Verified {
  readonly records: number;
  readonly signed: number;
  /** Files that standing entries name: with the recorded digest, and not to be found here. */
  readonly named: { readonly held: number; readonly away: number };
  readonly findings: readonly Finding[];
}

// Below this many records a second thread costs more than it saves.
const FILES_A_WORKER = 2_000;

/**
 * @param folder  absolute path of the register
 * @param places  the code, where the files that entries name are looked for, and the file of allowed signers
 */
export async function verifyRegister(
  folder: string,
  places: { readonly root?: string; readonly signers?: string } = {},
): Promise<Verified> {
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
  const signed = shares.flatMap((one) => one.signed);
  const replaced = new Set(heads.map((one) => one.replaces));
  const naming = shares.flatMap((one) => one.naming).filter(({ seal }) => !replaced.has(seal as Seal));
  const named = await checkNamed(places.root, naming);
  return {
    records: files.length,
    signed: signed.length,
    named: { held: named.held, away: named.away },
    findings: sortFindings([
      ...shares.flatMap((one) => one.findings),
      ...chain(heads).findings,
      ...signed.flatMap((one) => signatureFindings(one, places.signers)),
      ...named.findings,
    ]),
  };
}

async function checkNamed(
  root: string | undefined,
  naming: readonly Naming[],
): Promise<{ held: number; away: number; findings: Finding[] }> {
  const findings: Finding[] = [];
  let [held, away] = [0, 0];
  const known = new Map<string, string | null>();
  for (const { file, digests } of naming) {
    for (const { name, digest, kept } of digests) {
      const places = [
        ...(root === undefined ? [] : [join(root, name)]),
        ...(kept?.startsWith('/') ? [join(kept, basename(name)), kept] : []),
      ];
      const place = places.find((one) => statSync(one, { throwIfNoEntry: false })?.isFile());
      if (place === undefined) {
        away++;
        continue;
      }
      const found = known.get(place) ?? (await digestOf(place));
      known.set(place, found);
      if (found === digest) {
        held++;
        continue;
      }
      findings.push({
        kind: 'digest-differs',
        gravity: 'stop',
        place: { file, line: 1, column: 1 },
        says: `${printable(name)} has the digest ${found.slice(0, 19)}…, this record names ${printable(digest).slice(0, 19)}….`,
        evidence: [{ says: `looked at: ${printable(place)}` }],
        next: 'bring back the file with the recorded digest, or amend the entry when it named the wrong one.',
      });
    }
  }
  return { held, away, findings };
}

async function digestOf(file: string): Promise<string> {
  const hash = createHash('sha256');
  for await (const chunk of createReadStream(file, { highWaterMark: 1 << 20 })) hash.update(chunk as Buffer);
  return `sha256:${hash.digest('hex')}`;
}

function signatureFindings({ file, seal, signature }: Signed, signers: string | undefined): Finding[] {
  const state = checkSignature(seal, signature, signers);
  const place = { file, line: 1, column: 1 };
  if (state.good === true) {
    if (state.signer !== null) return [];
    return [
      {
        kind: 'signer-unknown',
        gravity: 'note',
        place,
        says: `This record is signed with ${state.key}, a key that no file of allowed signers gives to anybody.`,
        evidence: [],
        next: 'if you know whose key it is, add it to manifests/allowed-signers, a line "NAME KEYTYPE KEY".',
      },
    ];
  }
  return [
    {
      kind: 'signature-bad',
      gravity: state.good === false ? 'stop' : 'caution',
      place,
      says:
        state.good === false
          ? `The signature of this record is not one over its seal: ${printable(state.why)}`
          : `The signature of this record could not be tested: ${printable(state.why)}`,
      evidence: [],
      next:
        state.good === false
          ? 'bring the file back from git, and ask whoever signed it what they signed.'
          : 'install OpenSSH 8.2 or later and verify again.',
    },
  ];
}

export function checkRecords(folder: string, files: readonly string[]): Checked {
  const heads: RecordHead[] = [];
  const findings: Finding[] = [];
  const signed: Signed[] = [];
  const naming: Naming[] = [];
  for (const file of files) {
    const read = readRecord(file, readRecordBytes(folder, file));
    findings.push(...read.findings);
    const head = headOf(read);
    if (head !== null) heads.push(head);
    const { record } = read;
    if (record?.signature !== undefined) signed.push({ file, seal: record.seal, signature: record.signature });
    const { inputs = [], outputs = [] } = (record?.content ?? {}) as Pick<Entry, 'inputs' | 'outputs'>;
    if (record !== undefined && inputs.length + outputs.length > 0)
      naming.push({ file, seal: record.seal, digests: [...inputs, ...outputs] });
  }
  return { heads, findings, signed, naming };
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

/** `mortise audit`: the gate before a campaign. */
import { join } from 'node:path';
import { type Audit, audit } from '../audit/audit.ts';
import { gateReasons, sealedText, unseal } from '../audit/clearance.ts';
import { type AuditEvent, type AuditRequest, type GatheredCode, gather, treeIdOf } from '../audit/gather.ts';
import { manifestsUnreadable } from '../manifests/load-manifests.ts';
import { findAssembly } from '../manifests/manifest-files.edge.ts';
import { printable } from '../model/printable.ts';
import { auditReport } from '../report/audit-report.ts';
import { findingsText } from '../report/finding-text.ts';
import { reportJson } from '../report/report-json.ts';
import { reportText } from '../report/report-text.ts';
import { listTree } from '../runs/tree-files.edge.ts';
import { checkSignature, type SignatureState } from '../sources/ssh-signature.edge.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { readWhole, writeWhole } from './files.edge.ts';
import { jobsOf } from './jobs.ts';
import { type OpenedCode, openCode } from './open-code.ts';
import { progressLines } from './progress.ts';
import { SIGN, SIGNERS, signerOf } from './signing.ts';
import { textOptions } from './text-options.ts';
import { version } from './version.ts';
import { writeReports } from './write-reports.ts';

export const command: Command = {
  name: 'audit',
  answers: 'may this code start a campaign',
  usage: 'mortise audit [--no-run] [--clearance FILE] | --verify FILE | --gate FILE',
  options: {
    'no-run': {
      type: 'boolean',
      says: 'leave the cases alone; the code is held then, since nobody looked at their results',
    },
    clearance: { type: 'string', value: 'FILE', says: 'write the sealed outcome to this file' },
    sign: SIGN,
    verify: { type: 'string', value: 'FILE', says: 'test whether a clearance file is as it was sealed' },
    gate: {
      type: 'string',
      value: 'FILE',
      says: 'for a batch script: fail unless the checked-out code is the cleared one',
    },
    report: {
      type: 'string',
      multiple: true,
      value: 'FILE',
      says: 'also write the report; its form goes by the suffix: .txt .json .md .html .sarif .xml',
    },
    executor: { type: 'string', value: 'NAME', says: 'run the cases on this executor of the assembly' },
  },
  help: `
Reads manifests, source and history, checks every joint, runs every case and compares it with its reference, holds
what the runs visited against the range of every table and module, and the campaign against its allocation.

  mortise audit --clearance clearance.json
  mortise audit --gate clearance.json || exit 1      in a batch script, before the run

Exit status: 0 cleared, with or without cautions; 1 held, or the gate stays shut; 2 wrong usage or unreadable
manifests; 3 something could not be completed.`,
  async run(invocation, surroundings) {
    if (invocation.words.length > 0)
      throw new UsageError(`mortise audit takes options only; "${invocation.words[0]}" was given`);
    const { verify, gate } = invocation.options;
    if (typeof verify === 'string') return verifyFile(verify, invocation, surroundings);
    if (typeof gate === 'string') return passGate(gate, invocation, surroundings);
    const opened = await openCode(invocation, surroundings);
    if (opened.place === null || manifestsUnreadable(opened.findings)) {
      surroundings.out(
        invocation.options.json === true
          ? `${JSON.stringify({ mortise: version(), command: 'audit', findings: opened.findings }, null, 2)}\n`
          : findingsText(opened.findings, textOptions(invocation, surroundings)),
      );
      return EXIT.usage;
    }
    const audited = await auditOpened(opened, invocation, surroundings, progressLines(surroundings));
    if (surroundings.signal.aborted) return EXIT.interrupted;
    return finish(audited, invocation, surroundings);
  },
};

export interface Audited {
  readonly gathered: GatheredCode;
  readonly audit: Audit;
}

export async function auditOpened(
  opened: OpenedCode,
  invocation: Invocation,
  surroundings: Surroundings,
  onEvent: (event: AuditEvent) => void,
  parts: Pick<AuditRequest, 'onlyKept' | 'history'> = {},
): Promise<Audited> {
  const jobs = jobsOf(invocation);
  const { executor } = invocation.options;
  const gathered = await gather({
    root: opened.place.root,
    tree: opened.tree,
    manifests: opened.set,
    manifestFolder: opened.place.folder,
    findings: opened.findings,
    env: surroundings.env,
    run: invocation.options['no-run'] !== true,
    signal: surroundings.signal,
    onEvent,
    ...parts,
    ...(jobs === undefined ? {} : { jobs }),
    ...(typeof executor === 'string' ? { executor } : {}),
  });
  return { gathered, audit: audit(gathered) };
}

async function finish(
  { gathered, audit: audited }: Audited,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const report = auditReport(gathered, audited);
  const { clearance, report: files } = invocation.options;
  await writeReports(report, (files as readonly string[] | undefined) ?? [], surroundings);
  if (typeof clearance === 'string')
    await writeWhole(surroundings.cwd, clearance, sealedText(audited.clearance, signerOf(invocation, surroundings)));
  surroundings.out(
    invocation.options.json === true
      ? reportJson(report, version())
      : reportText(report, textOptions(invocation, surroundings)),
  );
  return auditStatus({ gathered, audit: audited });
}

/** Held is 1 even where something could not run; a clearance with something not run is 3. */
export function auditStatus({ gathered, audit: audited }: Audited): ExitStatus {
  if (audited.outcome === 'held') return EXIT.stop;
  return gathered.outcomes.some((one) => one.state === 'not runnable' || one.state === 'interrupted')
    ? EXIT.incomplete
    : EXIT.ok;
}

async function verifyFile(file: string, invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const read = unseal(new TextDecoder().decode(await readWhole(surroundings.cwd, file)));
  const signature = 'clearance' in read ? await signatureOf(read, surroundings) : null;
  const good = 'clearance' in read && signature?.good !== false;
  const plain =
    'broken' in read
      ? `${file}: ${read.broken}\nNext: audit again, or bring the file back from where it was kept.\n`
      : `${file} is as it was sealed: ${read.clearance.assembly} ${read.clearance.outcome} on ${read.clearance.made.slice(0, 10)}, revision ${read.clearance.revision}\n${signatureText(signature)}`;
  surroundings.out(
    invocation.options.json === true
      ? `${JSON.stringify({ file, sealed: 'clearance' in read, ...read, ...(signature === null ? {} : { signed: signature }) }, null, 2)}\n`
      : plain,
  );
  return good ? EXIT.ok : EXIT.stop;
}

/** Null for a clearance that nobody signed. */
async function signatureOf(
  { seal, signature }: { readonly seal: string; readonly signature?: string },
  { cwd }: Surroundings,
): Promise<SignatureState | null> {
  if (signature === undefined) return null;
  const place = findAssembly(cwd);
  return checkSignature(seal, signature, place === null ? undefined : join(place.root, place.folder, SIGNERS));
}

function signatureText(state: SignatureState | null): string {
  if (state === null) return 'not signed\n';
  if (state.good === true) {
    const who =
      state.signer === null ? 'a key that manifests/allowed-signers gives to nobody' : printable(state.signer);
    return `signed by ${who} (${state.key})\n`;
  }
  if (state.good === null) return `its signature could not be tested: ${printable(state.why)}\n`;
  return `its signature is not one over this seal: ${printable(state.why)}\nNext: ask whoever signed it what they signed.\n`;
}

async function passGate(file: string, invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const read = unseal(new TextDecoder().decode(await readWhole(surroundings.cwd, file)));
  const reasons =
    'broken' in read
      ? [`${file}: ${read.broken}`]
      : [
          ...gateReasons(read.clearance, await checkedOut(surroundings.cwd)),
          ...((await signatureOf(read, surroundings))?.good === false
            ? [`${file}: its signature is not one over its seal`]
            : []),
        ];
  const plain =
    reasons.length === 0
      ? `open: this is the code that was cleared\n`
      : `shut: ${reasons.join('\n      ')}\nNext: check out the cleared revision, or audit this one.\n`;
  surroundings.out(
    invocation.options.json === true
      ? `${JSON.stringify({ file, open: reasons.length === 0, reasons }, null, 2)}\n`
      : plain,
  );
  return reasons.length === 0 ? EXIT.ok : EXIT.stop;
}

async function checkedOut(cwd: string) {
  const listing = await listTree(cwd, null);
  return { revision: listing.commit, tree: await treeIdOf(cwd, listing.commit), changed: listing.changed };
}

/** `mortise check`: are the manifests sound and does every joint fit. Nothing is run. */
import { adapterSource, stepText } from '../fit/adapter.ts';
import { codeInterfaces } from '../fit/code-interfaces.ts';
import { fitCases } from '../fit/fit-assembly.ts';
import type { Joint } from '../fit/joint.ts';
import { manifestsUnreadable } from '../manifests/load-manifests.ts';
import { SAFETY_CAUTION } from '../model/caution.ts';
import { type Finding, hasStop, sortFindings } from '../model/finding.ts';
import { printable } from '../model/printable.ts';
import { findingsText } from '../report/finding-text.ts';
import { wrap } from '../report/wrap.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { type OpenedCode, openCode } from './open-code.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'check',
  answers: 'are the manifests sound and does every joint fit (nothing is run)',
  usage: 'mortise check [--adapters] [--at REV] [--assembly FILE]',
  options: {
    adapters: { type: 'boolean', says: 'print the source text of every adapter that is needed' },
  },
  help: `
Reads the manifests from the working folder upward and the source of every module plugged in. Lists each joint, that is
where what one module expects meets what another offers, and says what is wrong with it and with the manifests.

  mortise check --at HEAD~10     the same for an earlier commit, straight from git
  mortise check --adapters       with the adapters written out

Exit status: 0 sound and fitting, 1 something is a stop, 2 a manifest could not be read.`,
  async run(invocation, surroundings) {
    if (invocation.words.length > 0)
      throw new UsageError(`mortise check takes no words; "${invocation.words[0]}" was given`);
    const opened = await openCode(invocation, surroundings);
    const checked = opened.place === null ? { joints: [], findings: opened.findings } : await check(opened);
    if (invocation.options.json === true) {
      surroundings.out(`${JSON.stringify(document(opened.place === null ? null : opened, checked), null, 2)}\n`);
    } else {
      surroundings.out(text(opened.place === null ? null : opened, checked, invocation, surroundings));
    }
    return status(checked.findings);
  },
};

interface Checked {
  readonly joints: readonly Joint[];
  readonly findings: readonly Finding[];
}

async function check(opened: OpenedCode): Promise<Checked> {
  const interfaces = await codeInterfaces(opened.set, opened.tree);
  const { joints, findings } = fitCases(opened.set, interfaces);
  return { joints, findings: sortFindings([...opened.findings, ...findings]) };
}

function status(findings: readonly Finding[]): ExitStatus {
  if (manifestsUnreadable(findings)) return EXIT.usage;
  return hasStop(findings) ? EXIT.stop : EXIT.ok;
}

function document(opened: OpenedCode | null, { joints, findings }: Checked) {
  return {
    document: 'mortise check',
    assembly: opened?.set.assembly?.value.assembly ?? null,
    revision: opened?.tree.revision ?? null,
    caution: isSafetyRelated(opened) ? SAFETY_CAUTION : null,
    joints: joints.map((joint) => ({
      ...joint,
      adapter: joint.adapter === null ? null : { ...joint.adapter, source: adapterSource(joint.adapter) },
    })),
    findings,
  };
}

function text(
  opened: OpenedCode | null,
  { joints, findings }: Checked,
  invocation: Invocation,
  surroundings: Surroundings,
): string {
  const parts: string[] = [];
  if (opened !== null) {
    const { set, tree } = opened;
    const at = tree.revision === null ? 'work tree' : tree.revision.slice(0, 10);
    const plugged = Object.keys(set.assembly?.value.plugged ?? {}).length;
    const name = set.assembly?.value.assembly ?? 'no assembly';
    parts.push(
      `${printable(name)} (${at}): ${plugged} ${plural(plugged, 'module')} plugged in, ${joints.length} ${plural(joints.length, 'joint')}\n`,
    );
    if (isSafetyRelated(opened)) parts.push(`${wrap(SAFETY_CAUTION, textOptions(invocation, surroundings).width)}\n`);
    if (joints.length > 0) parts.push(jointsText(joints));
    for (const joint of joints) parts.push(...adapterText(joint, invocation.options.adapters === true));
  }
  parts.push(findingsText(findings, textOptions(invocation, surroundings)));
  return parts.join('\n');
}

function isSafetyRelated(opened: OpenedCode | null): boolean {
  return opened?.set.assembly?.value.consequence === 'safety-related';
}

/** A line a joint, in columns. */
function jointsText(joints: readonly Joint[]): string {
  const rows = joints.map((joint) => [
    `${joint.expecting.module} ${joint.expecting.version}`,
    `${joint.contract} ${joint.contractVersion}`,
    joint.offering === null ? 'nobody' : `${joint.offering.module} ${joint.offering.version}`,
    joint.state,
  ]);
  const head = ['expects', 'contract', 'offers', 'outcome'];
  const widths = head.map((title, column) =>
    Math.max(title.length, ...rows.map((row) => printable(row[column]!).length)),
  );
  const line = (row: readonly string[]) =>
    `  ${row
      .map((cell, column) => printable(cell).padEnd(widths[column]!))
      .join('  ')
      .trimEnd()}\n`;
  return [head, ...rows].map(line).join('');
}

function adapterText(joint: Joint, withSource: boolean): string[] {
  const { adapter } = joint;
  if (adapter === null) return [];
  const steps = adapter.steps.filter((step) => step.why !== '').map((step) => `  ${printable(stepText(step))}\n`);
  const lines = [`adapter from ${adapter.expecting} to ${adapter.procedure} of ${adapter.offering}\n`, ...steps];
  const source = withSource ? adapterSource(adapter) : null;
  if (source !== null) {
    lines.push(
      `  as ${source.file}:\n`,
      ...source.text
        .trimEnd()
        .split('\n')
        .map((one) => `    ${printable(one)}\n`),
    );
  }
  return [lines.join('')];
}

function plural(count: number, word: string): string {
  return count === 1 ? word : `${word}s`;
}

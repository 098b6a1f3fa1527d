/** `mortise drift`: what changed in history, and did the version say so. */

import { commitText } from '../history/commit-text.ts';
import type { DriftReport } from '../history/drift.ts';
import { driftKey } from '../history/drift-key.ts';
import type { ModuleStep } from '../history/module-step.ts';
import { keepReport, keptReport } from '../history/report-cache.edge.ts';
import { findAssembly } from '../manifests/manifest-files.edge.ts';
import { hasStop } from '../model/finding.ts';
import { compareText } from '../model/place.ts';
import { printable } from '../model/printable.ts';
import { findingsText } from '../report/finding-text.ts';
import { openRepository } from '../sources/open-tree.edge.ts';
import { type Command, EXIT, type Invocation, type Surroundings, UsageError } from './command.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'drift',
  answers: 'what changed in history, and did the version say so',
  usage: 'mortise drift [REV..REV] [--module M] [--component C]',
  options: {
    module: { type: 'string', value: 'M', says: 'only this module' },
    component: { type: 'string', value: 'C', says: 'only modules that fill this component' },
    bodies: { type: 'boolean', says: 'list steps that changed nothing but the inside of procedures, too' },
    fresh: { type: 'boolean', says: 'read everything again instead of using what earlier runs kept' },
  },
  help: `
Goes through every commit of the range, along all parents, and says for each module what changed in its interface, COMMON
layout, units, conventions, constants, domain and contract, which version bump that asks for, and which was declared: by the
manifest, or before there were manifests by tags and version files. Without manifests every source file is a module.
Without a range the whole history of HEAD is read. Nothing of the repository is executed and nothing is fetched.

  mortise drift v1.2..v1.3           between two releases
  mortise drift --module eos-gas     the life of one module

Exit status: 0 nothing of gravity stop, 1 at least one stop, 2 an unknown revision, 130 interrupted.`,
  async run(invocation, surroundings) {
    if (invocation.words.length > 1)
      throw new UsageError(`mortise drift takes one range; "${invocation.words[1]}" is a second`);
    const { options } = invocation;
    const place = findAssembly(surroundings.cwd, typeof options.assembly === 'string' ? options.assembly : undefined);
    const repository = openRepository(place?.root ?? surroundings.cwd);
    try {
      const range = await repository.range(
        invocation.words[0] ?? (typeof options.at === 'string' ? options.at : undefined),
      );
      const folder = place?.folder ?? 'manifests';
      const fresh = options.fresh === true;
      const key = `${await driftKey(repository, range, folder)} ${JSON.stringify([options, textOptions(invocation, surroundings)])}`;
      const kept = fresh ? null : keptReport(repository.place, key);
      if (kept !== null) {
        surroundings.out(kept.slice(1));
        return kept[0] === '1' ? EXIT.stop : EXIT.ok;
      }
      // Loaded only when something must be read: the answer kept from before needs none of the readers.
      const { drift } = await import('../history/drift.ts');
      const report = await drift(repository, range, {
        folder,
        workers: jobs(options.jobs),
        cache: !fresh,
        signal: surroundings.signal,
        ...(surroundings.stdoutIsTerminal && options.json !== true ? { onProgress: progress(surroundings) } : {}),
      });
      const chosen = choose(report, options.module, options.component);
      const printed = options.json === true ? json(chosen) : text(chosen, invocation, surroundings);
      surroundings.out(printed);
      if (!report.complete) return EXIT.interrupted;
      const status = hasStop(chosen.findings) ? EXIT.stop : EXIT.ok;
      if (!fresh) keepReport(repository.place, key, `${status}${printed}`);
      return status;
    } finally {
      repository.close();
    }
  },
};

function json(report: DriftReport): string {
  const paths = Object.fromEntries([...report.paths].map(([name, all]) => [name, [...all]]));
  return `${JSON.stringify({ document: 'mortise drift', ...report, paths }, null, 2)}\n`;
}

function jobs(option: unknown): number {
  if (option === undefined) return 2;
  const count = Number(option);
  if (!Number.isInteger(count) || count < 1)
    throw new UsageError(`--jobs takes a whole number from 1; "${String(option)}" was given`);
  return count;
}

function progress(surroundings: Surroundings): (done: number, all: number) => void {
  return (done, all) => surroundings.err(`\r${done} of ${all} commits compared${done + 50 > all ? '\n' : ''}`);
}

function choose(report: DriftReport, module: unknown, component: unknown): DriftReport {
  if (module === undefined && component === undefined) return report;
  const fits = (step: ModuleStep) =>
    (module === undefined || step.module === module) && (component === undefined || step.component === component);
  const steps = report.steps.filter(fits);
  if (steps.length === 0) {
    const known = [
      ...new Set(report.steps.map((step) => (module === undefined ? (step.component ?? '') : step.module))),
    ];
    const near = known.filter((name) => name !== '').sort(compareText);
    throw new UsageError(
      `nothing in this range is of the ${module === undefined ? `component "${component}"` : `module "${module}"`}; it knows ${near.slice(0, 12).join(', ')}${near.length > 12 ? ', ...' : ''}`,
    );
  }
  const modules = new Set(steps.map((step) => step.module));
  return {
    ...report,
    steps,
    findings: report.findings.filter((finding) => finding.module === undefined || modules.has(finding.module)),
  };
}

function text(report: DriftReport, invocation: Invocation, surroundings: Surroundings): string {
  const bodies = invocation.options.bodies === true;
  const shown = report.steps.filter(
    (step) => bodies || step.event !== null || step.asked === 'major' || step.asked === 'minor',
  );
  const byModule = grouped(shown);
  const parts = [
    `${report.commits} commits, ${new Set(report.steps.map((step) => step.module)).size} modules${report.manifests ? '' : ' (drafted, one a source file)'}, ${report.steps.length} steps\n`,
  ];
  for (const module of [...byModule.keys()].sort(compareText)) parts.push(moduleText(module, byModule.get(module)!));
  for (const note of report.notes) parts.push(`Note: ${printable(note)}\n`);
  parts.push(findingsText(report.findings, textOptions(invocation, surroundings)));
  return parts.join('\n');
}

function grouped(steps: readonly ModuleStep[]): Map<string, ModuleStep[]> {
  const map = new Map<string, ModuleStep[]>();
  for (const step of steps) map.set(step.module, [...(map.get(step.module) ?? []), step]);
  return map;
}

function moduleText(module: string, steps: readonly ModuleStep[]): string {
  const component = steps.at(-1)!.component;
  const lines = [`${printable(module)}${component === null ? '' : ` (${printable(component)})`}`];
  for (const step of steps) {
    lines.push(`  ${printable(commitText(step.commit))}`);
    if (step.event !== null) lines.push(`    ${eventText(step)}`);
    for (const change of step.changes)
      if (change.kind !== 'implementation') lines.push(`    ${printable(change.says)}`);
    if (step.asked !== 'none') lines.push(`    ${verdict(step)}`);
    if (step.callers.length > 0)
      lines.push(`    ${step.callers.length} ${step.callers.length === 1 ? 'call' : 'calls'} left behind`);
  }
  return `${lines.join('\n')}\n`;
}

function eventText({ event, movedFrom }: ModuleStep): string {
  return event === 'moved' && movedFrom !== undefined ? `moved from ${printable(movedFrom)}` : String(event);
}

function verdict(step: ModuleStep): string {
  const asks = `asks for a ${step.asked} bump`;
  if (step.state === 'open') return `${asks}; not released yet`;
  if (step.declaredBy === null) return `${asks}; nothing declares a version here`;
  const versions =
    step.versionAfter === null || step.versionAfter === step.versionBefore
      ? `stayed at ${step.versionBefore}`
      : `${step.versionBefore} to ${step.versionAfter}`;
  return `${asks}; ${printable(step.declaredBy)} ${step.declared === 'none' ? 'declares none' : `declares a ${step.declared} one`} (${versions})${step.state === 'undeclared' ? '  UNDECLARED' : ''}`;
}

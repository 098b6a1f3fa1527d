/** `mortise rerun`: run cases and compare them with their references; or record references. */
import { hasStop } from '../model/finding.ts';
import { printable, printableLines } from '../model/printable.ts';
import { deviationsText } from '../report/deviation-text.ts';
import { findingsText } from '../report/finding-text.ts';
import { paint } from '../report/style.ts';
import { type CaseOutcome, isBad } from '../runs/case-outcome.ts';
import { ensembleCases, ensembleText } from '../runs/ensemble-cases.ts';
import { readExchange } from '../runs/exchange.ts';
import { measureNoise, noiseText } from '../runs/measure-noise.ts';
import { recordReference } from '../runs/record-reference.ts';
import { rerunCases } from '../runs/rerun.ts';
import { runFindings } from '../runs/run-findings.ts';
import { gitUser } from '../runs/tree-files.edge.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import type { OpenedCode } from './open-code.ts';
import { jsonText, openForRuns, orUsage, RUN_OPTIONS, runRequest, secondsText } from './running.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'rerun',
  answers: 'do the cases still give the results that their references hold',
  usage: 'mortise rerun [CASE…] [--with COMPONENT=MODULE…] [--record --reason TEXT]',
  options: {
    with: { type: 'string', value: 'COMPONENT=MODULE', multiple: true, says: 'run with another module in a component' },
    record: { type: 'boolean', says: 'make the results the references of their cases' },
    noise: { type: 'boolean', says: 'measure the noise of the code around the references of the cases' },
    ensemble: { type: 'boolean', says: 'test whether three new runs belong to those that --noise measured' },
    reason: { type: 'string', value: 'TEXT', says: 'why these results may be trusted; needed with --record' },
    'even-changed': { type: 'boolean', says: 'record although the work tree differs from its commit' },
    fresh: { type: 'boolean', says: 'run again what was run already' },
    ...RUN_OPTIONS,
  },
  help: `
Builds the code once a configuration in a scratch folder, runs each case, and compares its outputs with the reference under
manifests/references/. Only PATH, HOME and the variables that the assembly declares reach the code. A result is kept by
everything that can change it, so a second call runs only what changed, and an interrupted one goes on.

  mortise rerun                          all cases, as the work tree is
  mortise rerun shock --at v2.1          one case, at a revision
  mortise rerun --with opacity=table     with another module plugged in
  mortise rerun shock --record --reason "agrees with the exact Riemann solution to 1e-3"
  mortise rerun shock --noise            run it as its "noise" declares, and keep what that moves beside the reference

Exit status: 0 nothing beyond tolerance, 1 something is, 2 wrong usage, 3 a case could not be run, 130 interrupted.`,
  async run(invocation, surroundings) {
    const opened = await openForRuns(invocation, surroundings);
    if (opened.place === null) return opened.status;
    checkRecording(invocation);
    if (invocation.options.ensemble === true) return testEnsemble(opened, invocation, surroundings);
    if (invocation.options.noise === true) return measure(opened, invocation, surroundings);
    const { at } = invocation.options;
    const outcomes = await orUsage(() =>
      rerunCases({
        ...runRequest(opened, invocation, surroundings),
        cases: invocation.words,
        at: typeof at === 'string' ? at : null,
        exchanges: listOf(invocation.options.with).map(readExchange),
        fresh: invocation.options.fresh === true,
      }),
    );
    const recorded =
      invocation.options.record === true && !surroundings.signal.aborted
        ? await record(opened, outcomes, invocation, surroundings)
        : [];
    // A reference that was just recorded is as it was recorded, whatever stood there before.
    const findings = runFindings(
      outcomes.filter((one) => !recorded.includes(one.case)),
      opened.set,
    );
    if (invocation.options.json === true) {
      surroundings.out(jsonText({ document: 'mortise rerun', cases: outcomes, recorded, findings }));
    } else {
      surroundings.out(outcomesText(outcomes, recorded, invocation, surroundings));
      if (findings.length > 0) surroundings.out(`\n${findingsText(findings, textOptions(invocation, surroundings))}`);
    }
    if (surroundings.signal.aborted) return EXIT.interrupted;
    return recorded.length > 0 && recorded.length === outcomes.length
      ? EXIT.ok
      : hasStop(findings)
        ? EXIT.stop
        : statusOf(outcomes, invocation.words.length > 0);
  },
};

async function measure(opened: OpenedCode, invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const { record: recording, at, with: exchanged } = invocation.options;
  if (recording === true || at !== undefined || listOf(exchanged).length > 0) {
    throw new UsageError(
      '--noise is measured around the reference of the work tree: leave out --record, --at and --with',
    );
  }
  const measured = await orUsage(() =>
    measureNoise({ ...runRequest(opened, invocation, surroundings), cases: invocation.words }),
  );
  surroundings.out(
    invocation.options.json === true
      ? jsonText({ document: 'mortise rerun --noise', cases: measured })
      : printableLines(noiseText(measured)),
  );
  if (surroundings.signal.aborted) return EXIT.interrupted;
  return measured.every((one) => one.noise !== null) ? EXIT.ok : EXIT.incomplete;
}

async function testEnsemble(
  opened: OpenedCode,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const { record: recording, noise, at } = invocation.options;
  if (recording === true || noise === true) throw new UsageError('--ensemble goes without --record and --noise');
  const tested = await orUsage(() =>
    ensembleCases({
      ...runRequest(opened, invocation, surroundings),
      cases: invocation.words,
      at: typeof at === 'string' ? at : null,
      exchanges: listOf(invocation.options.with).map(readExchange),
    }),
  );
  surroundings.out(
    invocation.options.json === true
      ? jsonText({ document: 'mortise rerun --ensemble', cases: tested })
      : printableLines(ensembleText(tested)),
  );
  if (surroundings.signal.aborted) return EXIT.interrupted;
  if (tested.some((one) => one.outcome?.passes === false)) return EXIT.stop;
  return tested.every((one) => one.outcome !== null) ? EXIT.ok : EXIT.incomplete;
}

function listOf(option: Invocation['options'][string]): readonly string[] {
  return Array.isArray(option) ? option : [];
}

function checkRecording(invocation: Invocation): void {
  const { record: recording, reason } = invocation.options;
  if (recording !== true) {
    if (reason !== undefined) throw new UsageError('--reason is said only with --record');
    return;
  }
  if (typeof reason !== 'string' || reason.trim() === '') {
    throw new UsageError('--record needs --reason TEXT: why may this result be trusted?');
  }
  if (listOf(invocation.options.with).length > 0) {
    throw new UsageError(
      'a reference belongs to the modules of the assembly: leave out --with, or plug the module in first',
    );
  }
}

async function record(
  opened: OpenedCode,
  outcomes: readonly CaseOutcome[],
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<string[]> {
  const recorded: string[] = [];
  for (const outcome of outcomes) {
    if (outcome.result === null || outcome.state === 'failed') continue;
    await orUsage(() =>
      recordReference({
        root: opened.place.root,
        manifestFolder: opened.place.folder,
        case: opened.set.cases.get(outcome.case)!.value,
        outcome,
        reason: invocation.options.reason as string,
        who: gitUser(opened.place.root) ?? surroundings.env.USER ?? 'unknown',
        evenChanged: invocation.options['even-changed'] === true,
      }),
    );
    recorded.push(outcome.case);
  }
  return recorded;
}

/** A module that cannot run here stops nothing unless its case was asked for by name. */
function statusOf(outcomes: readonly CaseOutcome[], named: boolean): ExitStatus {
  const bad = outcomes.filter(isBad);
  if (bad.some((one) => one.state === 'compared')) return EXIT.stop;
  if (bad.length > 0 || (named && outcomes.some((one) => one.state === 'not runnable'))) return EXIT.incomplete;
  return EXIT.ok;
}

function outcomesText(
  outcomes: readonly CaseOutcome[],
  recorded: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): string {
  if (outcomes.length === 0) return 'no cases are declared\n';
  const options = textOptions(invocation, surroundings);
  const parts = outcomes.map((one) => {
    const took =
      one.seconds === null ? '' : one.kept ? '  (kept from an earlier run)' : `  ${secondsText(one.seconds)}`;
    const state = recorded.includes(one.case) ? 'recorded' : (one.class ?? one.state);
    const style = recorded.includes(one.case) || !isBad(one) ? 'good' : 'alarm';
    const head = `${paint(printable(one.case), 'strong', options.colour)}: ${paint(state, style, options.colour)}${took}\n`;
    if (recorded.includes(one.case)) return head;
    if (one.state === 'compared') return head + deviationsText(one.deviations, options);
    const tail = isBad(one) && one.logTail.trim() !== '' ? `${lastLines(one.logTail)}\n` : '';
    return `${head}  ${printable(one.why)}\n${tail}`;
  });
  return parts.join('\n');
}

function lastLines(log: string): string {
  const lines = printableLines(log).trimEnd().split('\n');
  return lines
    .slice(-12)
    .map((line) => `  | ${line}`)
    .join('\n');
}

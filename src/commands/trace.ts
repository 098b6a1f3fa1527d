/** `mortise trace`: which commits, which modules in them, which procedures moved the quantities of a case. */
import { printable } from '../model/printable.ts';
import { figure } from '../report/deviation-text.ts';
import { paint } from '../report/style.ts';
import { wrap } from '../report/wrap.ts';
import { EndUnmeasurable } from '../runs/trace.ts';
import { type CaseTrace, type InsideStep, type TracedStep, TraceInterrupted, traceCase } from '../runs/trace-case.ts';
import { type Command, EXIT, type Invocation, type Surroundings, UsageError } from './command.ts';
import { jsonText, openForRuns, orUsage, RUN_OPTIONS, runRequest } from './running.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'trace',
  answers: 'which commit, module and procedure moved a result',
  usage: 'mortise trace CASE [QUANTITY…] GOOD..BAD',
  options: {
    exact: { type: 'boolean', says: 'any bit counts, not only what is beyond tolerance' },
    'commits-only': { type: 'boolean', says: 'do not look inside the commits for modules and procedures' },
    ...RUN_OPTIONS,
  },
  help: `
Runs the case at both ends and wherever the ends of a stretch of history differ, and so finds every step at which a quantity
moved beyond its tolerance, with about k·log2(n/k) + k runs for k steps among n commits. What was run is kept: a second call
goes on where an interrupted one ended. A commit that can't be built is passed by, told, and not tried again by a later trace
until "mortise rerun CASE --at COMMIT" succeeds. A step that a merge brought in is
looked for on its branch. Then the changes of the commit are taken back module by module, and procedure by procedure.

What moved and moved back between two commits that were run is not seen. Tolerances are those of the case at BAD.

  mortise trace cloud-shock v1.0..HEAD
  mortise trace cloud-shock temperature peak-temperature v1.0..v2.0

Exit status: 0 nothing moved, 1 something did, 2 wrong usage, 3 an end can't be run, 130 interrupted.`,
  async run(invocation, surroundings) {
    const { theCase, quantities, good, bad } = wordsOf(invocation.words);
    const opened = await openForRuns({ ...invocation, options: { ...invocation.options, at: bad } }, surroundings);
    if (opened.place === null) return opened.status;
    let trace: CaseTrace;
    try {
      trace = await orUsage(() =>
        traceCase({
          ...runRequest(opened, invocation, surroundings),
          case: theCase,
          quantities,
          good,
          bad,
          exact: invocation.options.exact === true,
          inside: invocation.options['commits-only'] !== true,
          onTrace: watch(invocation, surroundings),
        }),
      );
    } catch (error) {
      if (error instanceof TraceInterrupted) {
        surroundings.err('interrupted; the same call goes on from here\n');
        return EXIT.interrupted;
      }
      if (!(error instanceof EndUnmeasurable)) throw error;
      surroundings.err(
        `mortise trace: ${error.message}\nNext: see why with "mortise rerun ${theCase} --at ${error.commit.slice(0, 10)}".\n`,
      );
      return EXIT.incomplete;
    }
    if (invocation.options.json === true) surroundings.out(jsonText({ document: 'mortise trace', ...trace }));
    else surroundings.out(traceText(trace, invocation, surroundings));
    return trace.steps.length > 0 ? EXIT.stop : EXIT.ok;
  },
};

function wordsOf(words: readonly string[]) {
  const [theCase, ...rest] = words;
  const range = rest.at(-1)?.match(/^(.+?)\.\.(.+)$/);
  if (theCase === undefined || range === null || range === undefined || range[2]!.startsWith('.')) {
    throw new UsageError(
      'trace takes a case, the quantities to follow (all when none is named), and a range of commits such as v1.0..HEAD',
    );
  }
  return { theCase, quantities: rest.slice(0, -1), good: range[1]!, bad: range[2]! };
}

function watch(invocation: Invocation, surroundings: Surroundings) {
  if (!surroundings.stdoutIsTerminal || invocation.options.json === true) return () => {};
  return (event: Parameters<NonNullable<Parameters<typeof traceCase>[0]['onTrace']>>[0]) => {
    if (event.what === 'chain') surroundings.err(`${event.commits} commits\n`);
    if (event.what === 'measured') surroundings.err(`run ${event.runs}: ${event.commit.slice(0, 10)} ${event.state}\n`);
    if (event.what === 'inside') surroundings.err(`looking inside ${event.commit.slice(0, 10)}\n`);
  };
}

function traceText(trace: CaseTrace, invocation: Invocation, surroundings: Surroundings): string {
  const options = textOptions(invocation, surroundings);
  const lines: string[] = [];
  const commits = [...new Set(trace.steps.map((step) => step.after))];
  for (const commit of commits) {
    const steps = trace.steps.filter((step) => step.after === commit);
    const { subject, author, date, through, suspects } = steps[0]!;
    lines.push(
      `${paint(commit.slice(0, 10), 'strong', options.colour)}  ${date.slice(0, 10)}  ${printable(author)}  ${printable(subject)}`,
    );
    if (through !== null) lines.push(`    came in with the merge ${through.slice(0, 10)}`);
    if (suspects.length > 1) {
      lines.push(
        `    or one of the ${suspects.length - 1} before it, which can't be run: ${suspects
          .slice(0, -1)
          .map((one) => one.slice(0, 10))
          .join(' ')}`,
      );
    }
    for (const step of steps) lines.push(wrap(`    ${stepText(step)}`, options.width, '      '));
    lines.push('');
  }
  const moved = new Set(trace.steps.map((step) => step.quantity));
  const still = trace.quantities.filter((one) => !moved.has(one));
  if (still.length > 0) lines.push(wrap(`did not move: ${printable(still.join(', '))}`, options.width));
  for (const [quantity, noise] of Object.entries(trace.noise)) {
    lines.push(
      `${printable(quantity)} is noisy: two runs of one commit differ by ${figure(noise)} tolerances; only three times that counts`,
    );
  }
  for (const { commit, why } of trace.unmeasurable)
    lines.push(`can't be run: ${commit.slice(0, 10)}: ${printable(why)}`);
  if (trace.assumedUnmeasurable.length > 0) {
    lines.push(
      `not tried, between commits that can't be run: ${trace.assumedUnmeasurable.map((one) => one.slice(0, 10)).join(' ')}`,
    );
  }
  lines.push(`${trace.runs} of ${trace.commits + 1} commits looked at`);
  return `${lines.join('\n')}\n`;
}

function stepText(step: TracedStep): string {
  const by =
    step.tolerances === Number.POSITIVE_INFINITY
      ? 'is not comparable with before'
      : `moved by ${figure(step.tolerances)} tolerances`;
  const creeping = step.creeping ? ', one of several steps that are beyond tolerance together' : '';
  return printable(`${step.quantity} ${by}${creeping}${step.inside === null ? '' : insideText(step.inside)}`);
}

function insideText(inside: InsideStep): string {
  const modules = inside.modules.map((one) => one ?? 'files of no module').join(' with ');
  if (inside.procedures.length === 0) return `: ${modules}${inside.why === '' ? '' : ` (${inside.why})`}`;
  const parts = inside.procedures.map(
    (part) => `${part.procedure ?? 'what stands outside its procedures'} in ${part.file}`,
  );
  return `: ${modules}, ${parts.join(' with ')}`;
}

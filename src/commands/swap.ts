/** `mortise swap`: what moves when modules, values of the build or variables are exchanged. */
import { printable } from '../model/printable.ts';
import { deviationsText } from '../report/deviation-text.ts';
import { effectLines } from '../report/effect-text.ts';
import { paint } from '../report/style.ts';
import { wrap } from '../report/wrap.ts';
import { readExchange } from '../runs/exchange.ts';
import { type CaseSwap, swapModules } from '../runs/swap.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { jsonText, openForRuns, orUsage, RUN_OPTIONS, runRequest } from './running.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'swap',
  answers: 'what moves when a module is exchanged, by how much, where, and because of which exchange',
  usage: 'mortise swap COMPONENT=MODULE… [CASE…]',
  options: {
    against: {
      type: 'string',
      value: 'WHAT',
      says: 'compare with "plugged", a run without exchanges (the default), or "reference"',
    },
    ...RUN_OPTIONS,
  },
  help: `
Runs each case with and without the exchanges and says what moved, in tolerances, and where along the profile. Besides a
module, a value that the build selects (select.NAME=VALUE) or a variable (set.FC=flang, set.FFLAGS=-O0) can be exchanged.

With several exchanges each is also run alone; up to four are run in all combinations, which gives the effect of each, what
several do together beyond that, and a fair share of the whole for each (Shapley 1953). The smallest set of exchanges that
moves anything beyond tolerance is told.

  mortise swap equation-of-state=eos-table
  mortise swap equation-of-state=eos-table opacity=opacity-2020 cloud-shock

Exit status: 0 nothing beyond tolerance, 1 something is, 2 wrong usage, 3 a run could not be made, 130 interrupted.`,
  async run(invocation, surroundings) {
    const opened = await openForRuns(invocation, surroundings);
    if (opened.place === null) return opened.status;
    const words = invocation.words.filter((word) => word.includes('='));
    const cases = invocation.words.filter((word) => !word.includes('='));
    if (words.length === 0)
      throw new UsageError('swap needs at least one exchange, such as equation-of-state=eos-table');
    const { at, against = 'plugged' } = invocation.options;
    if (against !== 'plugged' && against !== 'reference') {
      throw new UsageError(`--against takes "plugged" or "reference"; "${String(against)}" is neither`);
    }
    const swaps = await orUsage(async () =>
      swapModules({
        ...runRequest(opened, invocation, surroundings),
        cases,
        at: typeof at === 'string' ? at : null,
        exchanges: words.map(readExchange),
        against,
      }),
    );
    if (invocation.options.json === true)
      surroundings.out(jsonText({ document: 'mortise swap', exchanges: words, cases: swaps }));
    else surroundings.out(swapsText(swaps, words, invocation, surroundings));
    return surroundings.signal.aborted ? EXIT.interrupted : statusOf(swaps);
  },
};

function statusOf(swaps: readonly CaseSwap[]): ExitStatus {
  if (swaps.some((one) => one.class === 'beyond tolerance' || one.class === 'not comparable')) return EXIT.stop;
  return swaps.some((one) => one.class === null) ? EXIT.incomplete : EXIT.ok;
}

function swapsText(
  swaps: readonly CaseSwap[],
  words: readonly string[],
  invocation: Invocation,
  surroundings: Surroundings,
): string {
  if (swaps.length === 0) return 'no case uses an exchanged component\n';
  const options = textOptions(invocation, surroundings);
  return swaps
    .map((swap) => {
      const together = swap.runs.at(-1)!;
      const bad = swap.class === 'beyond tolerance' || swap.class === 'not comparable' || swap.class === null;
      const state = paint(swap.class ?? together.state, bad ? 'alarm' : 'good', options.colour);
      const against = swap.against === 'plugged' ? 'against the plugged modules' : 'against the reference';
      const lines = [`${paint(printable(swap.case), 'strong', options.colour)}: ${state}, ${against}`];
      if (swap.baselineWhy !== null) lines.push(`  ${printable(swap.baselineWhy)}`);
      for (const run of swap.runs) {
        if (run.state !== 'compared')
          lines.push(`  ${printable(run.exchanges.join(' '))}: ${run.state}: ${printable(run.why)}`);
      }
      let text = `${lines.join('\n')}\n`;
      if (together.deviations.length > 0) text += deviationsText(together.deviations, options);
      const remarks = swap.effects.flatMap((effect) => effectLines(effect, words));
      if (words.length > 1 && swap.smallest !== null) {
        remarks.push(`the smallest set that moves a result beyond tolerance: ${swap.smallest.join(' ')}`);
      }
      return text + remarks.map((line) => `${wrap(`  ${printable(line)}`, options.width, '    ')}\n`).join('');
    })
    .join('\n');
}

/**
 * A case and two revisions come in; every step at which a quantity of the case moved goes out, with the module and the
 * procedure that moved it.
 */
import { compareCase } from '../compare/compare-outputs.edge.ts';
import type { Deviation } from '../model/deviation.ts';
import type { Case, ManifestSet } from '../model/manifest.ts';
import { type ChangedPart, ChangedText, changedGroups } from './changed-parts.ts';
import { codeFiles } from './code-files.ts';
import { type CommitGraph, chainBetween, readGraph } from './commit-graph.ts';
import { casesNamed, configurationOf } from './configuration.ts';
import { tolerancesApart } from './distance.ts';
import { keyOf } from './key.ts';
import { manifestsOf, readListed } from './listed-tree.edge.ts';
import { proceduresIn } from './procedures.ts';
import { type Laboratory, type RerunRequest, type TreeRuns, withLaboratory } from './rerun.ts';
import { smallestSet } from './smallest-set.ts';
import { type Step, traceChain } from './trace.ts';
import { commitOf, git } from './tree-files.edge.ts';
import type { RunResult } from './workshop.ts';

export interface TraceRequest extends Omit<RerunRequest, 'cases' | 'at' | 'exchanges' | 'fresh'> {
  /** Name of the case, as the manifests at the bad end declare it. */
  readonly case: string;
  readonly good: string;
  readonly bad: string;
  /** Quantities, features and totals to follow; all when absent or empty. */
  readonly quantities?: readonly string[];
  /** Any bit counts, not only what is beyond tolerance. */
  readonly exact?: boolean;
  /** Look into each step for the module and the procedure; true when absent. */
  readonly inside?: boolean;
  readonly onTrace?: (event: TraceEvent) => void;
}

export type TraceEvent =
  | { readonly what: 'chain'; readonly commits: number }
  | { readonly what: 'measured'; readonly commit: string; readonly state: RunResult['state']; readonly runs: number }
  | { readonly what: 'inside'; readonly commit: string };

export interface TracedStep extends Step {
  /** The merge that brought the commit in, when it stands on a side branch. */
  readonly through: string | null;
  /** Of `after`. */
  readonly subject: string;
  readonly author: string;
  readonly date: string;
  readonly inside: InsideStep | null;
}

export interface InsideStep {
  /**
   * Modules that have to be taken back together to undo the step; null stands for files of no module, `manifests` for the
   * way it is built and run.
   */
  readonly modules: readonly (string | null)[];
  /** Procedures that have to be taken back together; `procedure` null is what stands outside all procedures of the file. */
  readonly procedures: readonly ChangedPart[];
  /** Why no procedure is told. */
  readonly why: string;
}

export interface CaseTrace {
  readonly case: string;
  readonly good: string;
  readonly bad: string;
  readonly commits: number;
  readonly quantities: readonly string[];
  readonly steps: readonly TracedStep[];
  readonly unmeasurable: readonly { readonly commit: string; readonly why: string }[];
  readonly assumedUnmeasurable: readonly string[];
  /** Commits measured or tried along chains; those taken from earlier runs count too. */
  readonly runs: number;
  /** Largest difference between two runs of the good end, in tolerances, where it is above 0. */
  readonly noise: Readonly<Record<string, number>>;
}

/** A quantity that the case does not have; the message lists those it has. */
export class NoQuantity extends Error {
  override readonly name = 'NoQuantity';
}

/** The trace was interrupted; what was measured is kept, and the same call goes on from there. */
export class TraceInterrupted extends Error {
  override readonly name = 'TraceInterrupted';
}

/** A step counts only when it is this many times what two runs of one commit differ by. */
const ABOVE_NOISE = 3;

/**
 * Traces a case.
 *
 * @throws {NotDeclared} {NoQuantity} {NoPath} {GitFailed} {EndUnmeasurable} {TraceInterrupted}
 */
export async function traceCase(request: TraceRequest): Promise<CaseTrace> {
  const good = commitOf(request.root, request.good);
  const bad = commitOf(request.root, request.bad);
  const graph = readGraph(
    git(request.root, [
      'rev-list',
      '--parents',
      good === bad ? '--max-count=1' : '--ancestry-path',
      bad,
      ...(good === bad ? [] : [`^${good}`]),
    ]).toString(),
  );
  return withLaboratory(request, (laboratory) => new Tracing(request, laboratory, graph, good, bad).trace());
}

interface Measured {
  readonly out: string;
  readonly key: string;
}

class Tracing {
  private readonly request: TraceRequest;
  private readonly laboratory: Laboratory;
  private readonly graph: CommitGraph;
  private readonly good: string;
  private readonly bad: string;
  private readonly trees = new Map<string, Promise<TreeRuns>>();
  private readonly measuring = new Map<string, Promise<Measured | null>>();
  private readonly compared = new Map<string, Promise<readonly Deviation[]>>();
  private readonly failures = new Map<string, string>();
  private runs = 0;
  private theCase!: Case;
  private readonly folder: string;

  constructor(request: TraceRequest, laboratory: Laboratory, graph: CommitGraph, good: string, bad: string) {
    this.request = request;
    this.laboratory = laboratory;
    this.graph = graph;
    this.good = good;
    this.bad = bad;
    this.folder = laboratory.manifestFolder;
  }

  async trace(): Promise<CaseTrace> {
    const newest = await this.tree(this.bad);
    this.theCase = casesNamed(newest.manifests, [this.request.case])[0]!;
    const quantities = quantitiesOf(this.theCase, this.request.quantities ?? []);
    const noise = await this.noiseOf(quantities);
    const commits = this.good === this.bad ? [this.good, this.bad] : chainBetween(this.graph, this.good, this.bad);
    this.request.onTrace?.({ what: 'chain', commits: commits.length - 1 });
    const threshold = (quantity: string) => Math.max(1, ABOVE_NOISE * (noise[quantity] ?? 0));
    const question = {
      measure: (commit: string) => this.measure(commit),
      distance: (a: Measured, b: Measured, quantity: string) => this.distance(a, b, quantity),
      threshold,
    };
    const chain = await traceChain({ ...question, commits, quantities });
    const assumed = [...chain.assumedUnmeasurable];
    const steps: (Step & { through: string | null })[] = [];
    for (const step of chain.steps) {
      const parents = this.graph.parents.get(step.after) ?? [];
      const found =
        step.suspects.length === 1 && parents.length > 1 ? await this.throughMerge(step, parents, question) : null;
      steps.push(...(found ?? [{ ...step, through: null }]));
    }
    const traced: TracedStep[] = [];
    for (const step of steps) {
      const looked = this.request.inside !== false && step.suspects.length === 1;
      traced.push({
        ...step,
        ...this.told(step.after),
        inside: looked ? await this.inside(step, threshold(step.quantity)) : null,
      });
    }
    return {
      case: this.theCase.case,
      good: this.good,
      bad: this.bad,
      commits: commits.length - 1,
      quantities,
      steps: traced,
      unmeasurable: [...this.failures].map(([commit, why]) => ({ commit, why })),
      assumedUnmeasurable: assumed,
      runs: this.runs,
      noise: Object.fromEntries(Object.entries(noise).filter(([, one]) => one > 0)),
    };
  }

  private tree(commit: string): Promise<TreeRuns> {
    let tree = this.trees.get(commit);
    if (tree === undefined) {
      tree = this.laboratory.tree(commit).then(async (listed) => {
        const own = await manifestsOf(listed.listing, this.folder);
        // Before manifests were written, the code is built and run as the newest ones say.
        return own.assembly === null ? listed : listed.by(own);
      });
      this.trees.set(commit, tree);
    }
    return tree;
  }

  /** The case as it was run at a commit; its outputs and tolerances are always the newest. */
  private caseAt(manifests: ManifestSet): Case {
    return manifests.cases.get(this.theCase.case)?.value ?? this.theCase;
  }

  private measure(commit: string): Promise<Measured | null> {
    let measured = this.measuring.get(commit);
    if (measured === undefined) {
      this.runs++;
      measured = this.tree(commit).then(async (tree) => {
        const { result } = await tree.run(this.caseAt(tree.manifests), [], { keepFailures: true });
        this.request.onTrace?.({ what: 'measured', commit, state: result.state, runs: this.runs });
        const usable = this.usable(result);
        if (usable === null && result.state !== 'ran') this.failures.set(commit, result.why);
        return usable;
      });
      this.measuring.set(commit, measured);
    }
    return measured;
  }

  private usable(result: RunResult): Measured | null {
    if (result.state === 'interrupted') throw new TraceInterrupted('the trace was interrupted');
    return result.state === 'ran' ? { out: result.out, key: result.key } : null;
  }

  private async distance(a: Measured, b: Measured, quantity: string): Promise<number> {
    if (a.key === b.key) return 0;
    const pair = `${a.key} ${b.key}`;
    let deviations = this.compared.get(pair);
    if (deviations === undefined) {
      deviations = compareCase(this.theCase, a.out, b.out);
      this.compared.set(pair, deviations);
    }
    const one = (await deviations).filter((deviation) => deviation.quantity === quantity);
    return one.reduce((most, deviation) => Math.max(most, tolerancesApart(deviation, this.request.exact)), 0);
  }

  /** Runs the good end a second time: what differs between the two is noise. */
  private async noiseOf(quantities: readonly string[]): Promise<Record<string, number>> {
    const tree = await this.tree(this.good);
    const [first, second] = await Promise.all([
      this.measure(this.good),
      tree.run(this.caseAt(tree.manifests), [], { keepFailures: true, repeat: 1 }),
    ]);
    const again = this.usable(second.result);
    if (first === null || again === null) return {};
    const noise = await Promise.all(
      quantities.map(async (one) => [one, await this.distance(first, again, one)] as const),
    );
    // What is not comparable with itself can't be told from anything; it keeps its plain threshold.
    return Object.fromEntries(noise.filter(([, distance]) => Number.isFinite(distance)));
  }

  /** Follows what a merge brought in; null when the merge itself made the step. */
  private async throughMerge(
    step: Step,
    parents: readonly string[],
    question: Omit<Parameters<typeof traceChain<Measured>>[0], 'commits' | 'quantities'>,
  ): Promise<(Step & { through: string })[] | null> {
    for (const side of parents.filter((parent) => parent !== step.before)) {
      let base: string;
      try {
        base = git(this.request.root, ['merge-base', step.before, side]).toString().trim();
      } catch {
        continue;
      }
      if (base === side) continue;
      const lines = git(this.request.root, ['rev-list', '--parents', '--ancestry-path', side, `^${base}`]).toString();
      const commits = chainBetween(readGraph(lines), base, side);
      const [low, high] = await Promise.all([this.measure(base), this.measure(side)]);
      if (low === null || high === null) continue;
      const chain = await traceChain({ ...question, commits, quantities: [step.quantity] });
      if (chain.steps.length > 0) return chain.steps.map((one) => ({ ...one, through: step.after }));
    }
    return null;
  }

  private told(commit: string): { subject: string; author: string; date: string } {
    const text = git(this.request.root, [
      'show',
      '-s',
      '--no-show-signature',
      '--format=%s%x00%an%x00%cI',
      commit,
    ]).toString();
    const [subject = '', author = '', date = ''] = text.trimEnd().split('\0');
    return { subject, author, date };
  }

  /** Takes back parts of a commit until it is told which of them moved the quantity. */
  private async inside(step: Step, threshold: number): Promise<InsideStep | null> {
    this.request.onTrace?.({ what: 'inside', commit: step.after });
    const [before, after] = await Promise.all([this.tree(step.before), this.tree(step.after)]);
    const reference = await this.measure(step.before);
    if (reference === null) return null;
    const groups = changedGroups(
      codeFiles(before.listing.files, this.folder),
      codeFiles(after.listing.files, this.folder),
      [after.manifests, before.manifests],
    );
    const named = groups.map((group) => ({ ...group, manifests: false }));
    if (this.wayOf(before.manifests) !== this.wayOf(after.manifests)) {
      named.push({ module: 'manifests', files: [], manifests: true });
    }
    const undoes = async (
      replaced: ReadonlyMap<string, Uint8Array | null>,
      withManifests: boolean,
    ): Promise<boolean> => {
      const manifests = withManifests ? before.manifests : after.manifests;
      const tree = after.by(manifests);
      const { result } = await tree.run(this.caseAt(manifests), [], { replaced, keepFailures: true });
      const measured = this.usable(result);
      return measured !== null && (await this.distance(reference, measured, step.quantity)) <= threshold;
    };
    const guilty = await smallestSet(named, (subset) =>
      undoes(
        this.filesBefore(
          before,
          subset.flatMap((group) => group.files),
        ),
        subset.some((group) => group.manifests),
      ),
    );
    const modules = guilty.map((group) => group.module);
    if (guilty.some((group) => group.manifests)) {
      return { modules, procedures: [], why: 'the way the code is built or run changed with it' };
    }
    const files = guilty.flatMap((group) => group.files);
    const texts = await Promise.all(files.map((file) => this.changedText(file, before, after)));
    const cut = texts.filter((text): text is ChangedText => text !== null);
    const parts = cut.flatMap((text) => text.parts);
    if (cut.length < files.length || parts.length === 0) {
      const whole = files.filter((file) => !cut.some((text) => text.file === file));
      const why =
        whole.length === 0 ? 'nothing in its procedures changed' : `taken back as a whole: ${whole.join(', ')}`;
      return { modules, procedures: [], why };
    }
    const procedures = await smallestSet(parts, (subset) => {
      const replaced = new Map<string, Uint8Array | null>();
      for (const text of cut) replaced.set(text.file, Buffer.from(text.takenBack(subset), 'latin1'));
      return undoes(replaced, false);
    });
    return { modules, procedures, why: '' };
  }

  /** Everything of the manifests that can change how the case is built and run. */
  private wayOf(manifests: ManifestSet): string {
    const theCase = this.caseAt(manifests);
    const { plugged: _, needs: __, builtWith: ___, ...way } = configurationOf(manifests, theCase);
    return keyOf(JSON.parse(JSON.stringify({ ...way, run: theCase.run, inputs: theCase.inputs ?? [] })));
  }

  private filesBefore(before: TreeRuns, files: readonly string[]): Map<string, Uint8Array | null> {
    return new Map(files.map((file) => [file, readListed(before.listing, file)]));
  }

  private async changedText(file: string, before: TreeRuns, after: TreeRuns): Promise<ChangedText | null> {
    const [old, now] = [readListed(before.listing, file), readListed(after.listing, file)];
    if (old === null || now === null) return null;
    const [oldSpans, nowSpans] = await Promise.all([proceduresIn(file, old), proceduresIn(file, now)]);
    if (nowSpans === null || oldSpans === null) return null;
    return new ChangedText(
      file,
      { text: Buffer.from(old).toString('latin1'), spans: oldSpans },
      { text: Buffer.from(now).toString('latin1'), spans: nowSpans },
    );
  }
}

/** Names of everything a case compares, or those asked for. */
export function quantitiesOf(theCase: Case, asked: readonly string[]): string[] {
  const all = [
    ...theCase.outputs.flatMap((output) => Object.keys(output.quantities)),
    ...Object.keys(theCase.features ?? {}),
    ...(theCase.conserved ?? []).map((one) => (typeof one === 'string' ? one : one.total)),
  ];
  const known = [...new Set(all)];
  for (const one of asked) {
    if (!known.includes(one))
      throw new NoQuantity(`the case ${theCase.case} has no quantity "${one}"; it has ${known.join(', ')}`);
  }
  return asked.length === 0 ? known : [...new Set(asked)];
}

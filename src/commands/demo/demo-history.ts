/** The demo's history as written in fixtures/demo/history.yaml, step by step, to the files that each commit holds. Pure. */
import { parse } from 'yaml';

export interface DemoStep {
  readonly id: string;
  readonly date: string;
  readonly author: string;
  readonly message: string;
  /** Branch it is made on; `main` when absent. */
  readonly on?: string;
  /** Step that a branch begins from; the last one on its branch when absent. */
  readonly from?: string;
  /** Branch that is merged in. */
  readonly merge?: string;
  readonly tag?: string;
  readonly edits?: readonly { readonly file: string; readonly find: string; readonly put: string }[];
  /** Path in the code to a file under fixtures/demo/later/. */
  readonly files?: Readonly<Record<string, string>>;
  readonly moves?: Readonly<Record<string, string>>;
  readonly removes?: readonly string[];
  /** References recorded from the commit before. */
  readonly record?: { readonly cases: readonly string[]; readonly reason: string };
}

export interface DemoCommit {
  readonly step: DemoStep;
  /** Steps that are its parents. */
  readonly parents: readonly string[];
  readonly files: ReadonlyMap<string, Uint8Array>;
}

export interface DemoSources {
  /** The tree of the first commit. */
  readonly first: ReadonlyMap<string, Uint8Array>;
  /** A file under fixtures/demo/later/. */
  later(name: string): Uint8Array;
  /** Files of references recorded at a step, by path in the code; empty while they were not recorded yet. */
  recorded(step: string): ReadonlyMap<string, Uint8Array>;
}

export function demoSteps(text: string): DemoStep[] {
  return (parse(text) as { steps: DemoStep[] }).steps;
}

/**
 * Every commit with the whole tree it holds, in the order of the steps.
 *
 * @param until  the last step to make; all when absent
 * @throws {Error} when an edit finds its text not exactly once: the history no longer hangs together
 */
export function demoCommits(steps: readonly DemoStep[], sources: DemoSources, until?: string): DemoCommit[] {
  const made = new Map<string, DemoCommit>();
  const heads = new Map<string, string>();
  for (const step of steps) {
    const branch = step.on ?? 'main';
    const parents = [
      step.from ?? heads.get(branch),
      step.merge === undefined ? undefined : heads.get(step.merge),
    ].filter((one) => one !== undefined);
    const files = new Map(parents[0] === undefined ? sources.first : made.get(parents[0])!.files);
    if (parents[1] !== undefined) mergeInto(files, made, parents[0]!, parents[1]);
    change(files, step, sources);
    made.set(step.id, { step, parents, files });
    heads.set(branch, step.id);
    if (step.id === until) break;
  }
  return [...made.values()];
}

function change(files: Map<string, Uint8Array>, step: DemoStep, sources: DemoSources): void {
  for (const [from, to] of Object.entries(step.moves ?? {})) {
    files.set(to, fileOf(files, from, step));
    files.delete(from);
  }
  for (const { file, find, put } of step.edits ?? []) {
    const parts = Buffer.from(fileOf(files, file, step))
      .toString('utf8')
      .split(find);
    if (parts.length !== 2)
      throw new Error(`step ${step.id}: ${file} holds the text to replace ${parts.length - 1} times: ${find}`);
    files.set(file, Buffer.from(parts.join(put)));
  }
  for (const [path, name] of Object.entries(step.files ?? {})) files.set(path, sources.later(name));
  for (const path of step.removes ?? []) files.delete(path);
  if (step.record !== undefined) for (const [path, bytes] of sources.recorded(step.id)) files.set(path, bytes);
}

function fileOf(files: ReadonlyMap<string, Uint8Array>, file: string, step: DemoStep): Uint8Array {
  const bytes = files.get(file);
  if (bytes === undefined) throw new Error(`step ${step.id}: there is no ${file}`);
  return bytes;
}

/** What the branch changed since it left is taken over; the two sides never touch one file here. */
function mergeInto(
  files: Map<string, Uint8Array>,
  made: ReadonlyMap<string, DemoCommit>,
  into: string,
  from: string,
): void {
  const ancestors = new Set<string>();
  for (let at: string | undefined = into; at !== undefined; at = made.get(at)?.parents[0]) ancestors.add(at);
  let fork: string | undefined = from;
  while (fork !== undefined && !ancestors.has(fork)) fork = made.get(fork)?.parents[0];
  const before = fork === undefined ? new Map<string, Uint8Array>() : made.get(fork)!.files;
  const theirs = made.get(from)!.files;
  for (const [path, bytes] of theirs) if (before.get(path) !== bytes) files.set(path, bytes);
  for (const path of before.keys()) if (!theirs.has(path)) files.delete(path);
}

/** The whole history as a stream for `git fast-import`: the same bytes on every machine, so the same commit ids. */
export function fastImport(commits: readonly DemoCommit[]): Buffer {
  const parts: (string | Uint8Array)[] = [];
  const data = (bytes: Uint8Array) => parts.push(`data ${bytes.length}\n`, bytes, '\n');
  const marks = new Map(commits.map((commit, index) => [commit.step.id, index + 1]));
  for (const { step, parents, files } of commits) {
    const seconds = Date.parse(`${step.date}T12:00:00Z`) / 1000;
    const person = `${step.author} <${step.author.toLowerCase().replace(/[^a-z]+/g, '.')}@example.org> ${seconds} +0000`;
    parts.push(
      `commit refs/heads/${step.on ?? 'main'}\nmark :${marks.get(step.id)}\nauthor ${person}\ncommitter ${person}\n`,
    );
    data(Buffer.from(`${step.message.trim()}\n`));
    for (const [index, parent] of parents.entries())
      parts.push(`${index === 0 ? 'from' : 'merge'} :${marks.get(parent)}\n`);
    parts.push('deleteall\n');
    for (const [path, bytes] of [...files].sort(([a], [b]) => (a < b ? -1 : 1))) {
      parts.push(`M 100644 inline ${path}\n`);
      data(bytes);
    }
    if (step.tag !== undefined) parts.push(`reset refs/tags/${step.tag}\nfrom :${marks.get(step.id)}\n\n`);
  }
  return Buffer.concat(parts.map((part) => (typeof part === 'string' ? Buffer.from(part) : part)));
}

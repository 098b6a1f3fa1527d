/** Who still called the old interface at a commit that changed it. */
import type { Change } from '../model/change.ts';
import type { CallSite } from '../model/interface.ts';
import type { Place } from '../model/place.ts';
import { languageOf, readSource } from '../readers/read-source.ts';
import { decodeText } from '../sources/git-object.ts';
import type { Repository } from '../sources/repository.edge.ts';
import type { ModuleStep } from './module-step.ts';

/** Changes that a call can be too old for. */
export const CALL_BREAKING: ReadonlySet<Change['kind']> = new Set([
  'procedure-removed',
  'argument-removed',
  'argument-added',
  'argument-reordered',
  'argument-type',
  'argument-bytes',
  'argument-rank',
  'argument-optional',
  'return-order',
  'result-type',
  'unit-changed',
  'convention-changed',
]);

export class CallerFinder {
  private readonly repository: Repository;
  /** Names in a blob, in lower case: most files can be passed over without being read. */
  private readonly names = new Map<string, ReadonlySet<string>>();
  private readonly calls = new Map<string, readonly CallSite[]>();

  constructor(repository: Repository) {
    this.repository = repository;
  }

  /** Calls of changed procedures in files that the commit did not touch; the places of the calls at that commit. */
  async leftBehind(step: Pick<ModuleStep, 'commit' | 'changes'>, touched: ReadonlySet<string>): Promise<Place[]> {
    const procedures = new Set(
      step.changes
        .filter(({ kind }) => CALL_BREAKING.has(kind))
        .map(({ subject }) => subject.split('.')[0]!.toLowerCase()),
    );
    if (procedures.size === 0) return [];
    const places: Place[] = [];
    const { entries } = await this.repository.list(step.commit.id);
    for (const { path, id, kind } of entries) {
      const language = kind === 'file' && !touched.has(path) ? languageOf(path) : null;
      if (language === null || language === 'table') continue;
      const names = await this.namesIn(id);
      if (![...procedures].some((name) => names.has(name))) continue;
      for (const call of await this.callsIn(path, id)) {
        if (!procedures.has(call.callee.toLowerCase())) continue;
        places.push({ file: path, line: call.line, column: call.column, revision: step.commit.id });
      }
    }
    return places;
  }

  private async namesIn(id: string): Promise<ReadonlySet<string>> {
    const known = this.names.get(id);
    if (known !== undefined) return known;
    const bytes = await this.repository.blob(id);
    const names = new Set(
      bytes === null
        ? []
        : (decodeText(bytes)
            .toLowerCase()
            .match(/[a-z_]\w*/g) ?? []),
    );
    if (this.names.size > 5_000) this.names.clear();
    this.names.set(id, names);
    return names;
  }

  private async callsIn(path: string, id: string): Promise<readonly CallSite[]> {
    const known = this.calls.get(id);
    if (known !== undefined) return known;
    const bytes = await this.repository.blob(id);
    const calls = bytes === null ? [] : (await readSource(path, bytes)).calls;
    this.calls.set(id, calls);
    return calls;
  }
}

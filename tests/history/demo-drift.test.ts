import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { parse } from 'yaml';
import { layDemo } from '../../src/commands/demo/demo-repository.edge.ts';
import { type DriftReport, drift } from '../../src/history/drift.ts';
import { openRepository } from '../../src/sources/open-tree.edge.ts';
import type { Repository } from '../../src/sources/repository.edge.ts';
import { temporaryFolder } from '../sources/repositories.ts';

const fixture = (name: string) => parse(readFileSync(new URL(`../../fixtures/demo/${name}`, import.meta.url), 'utf8'));
interface Planted {
  readonly step: string;
  readonly tells: { readonly kind: string; readonly module?: string; readonly says: string };
}
const KINDS = ['drift-undeclared', 'reference-renewed', 'tolerance-widened'];
const planted = (fixture('planted.yaml').planted as Planted[]).filter(({ tells }) => KINDS.includes(tells.kind));
const messages = new Map(
  (fixture('history.yaml').steps as { id: string; message: string }[]).map(({ id, message }) => [id, message]),
);

describe("drift over the demo's history", () => {
  let repository: Repository;
  let report: DriftReport;
  beforeAll(async () => {
    const folder = join(temporaryFolder(), 'demo');
    layDemo(folder);
    repository = openRepository(folder);
    report = await drift(repository, await repository.range(undefined), { cache: false, workers: 0 });
  });
  afterAll(() => repository?.close());

  it.each(planted.map((one) => [one.step, one] as const))(
    'finds what was planted in %s at its commit',
    (step, { tells }) => {
      const found = report.findings.filter(
        ({ kind, module, says }) => kind === tells.kind && module === tells.module && says.includes(tells.says),
      );
      expect(found).toHaveLength(1);
      expect(found[0]!.evidence[0]!.says).toContain(messages.get(step));
    },
  );

  it('finds nothing else', () => {
    expect(report.findings).toHaveLength(planted.length);
  });
});

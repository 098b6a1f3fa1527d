import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { objectId } from '../../src/sources/git-object.ts';
import {
  contentSwhid,
  type DirectoryEntry,
  directorySwhid,
  ignoredQualifiers,
  parseSwhid,
  printSwhid,
  releaseSwhid,
  revisionSwhid,
  type SnapshotBranch,
  snapshotSwhid,
} from '../../src/sources/swhid.ts';

// Published values: SWHID specification 1.2 (ISO/IEC 18670:2025), Pro Git, and git itself; each entry names its own source.
interface Check {
  readonly id: string;
  readonly topic: string;
  readonly what: string;
  readonly source: string;
  // biome-ignore lint/suspicious/noExplicitAny: the table holds a different shape for each topic
  readonly inputs: any;
  // biome-ignore lint/suspicious/noExplicitAny: the table holds a different shape for each topic
  readonly expected: any;
}
const checks = JSON.parse(readFileSync(new URL('../checks/swhid.json', import.meta.url), 'utf8')) as Check[];
const of = (topic: string) => checks.filter((check) => check.topic === `SWHID: ${topic}`);

describe('SWHID', () => {
  it('checks every topic of the published table', () => {
    expect([...new Set(checks.map(({ topic }) => topic))].sort()).toEqual(
      ['content', 'directory', 'real repository', 'release', 'revision', 'snapshot', 'syntax'].map(
        (topic) => `SWHID: ${topic}`,
      ),
    );
  });

  for (const check of of('content').filter(({ inputs }) => inputs.bytes_hex !== undefined)) {
    it(`hashes a content as published: ${check.id} (${check.source})`, () => {
      expect(contentSwhid(Buffer.from(check.inputs.bytes_hex, 'hex'))).toBe(check.expected.swhid);
    });
  }

  for (const check of of('directory')) {
    it(`hashes a directory as published: ${check.id} (${check.source})`, () => {
      const entries = check.inputs.entries as DirectoryEntry[];
      expect(directorySwhid(entries)).toBe(check.expected.swhid);
      expect(directorySwhid([...entries].reverse())).toBe(check.expected.swhid);
    });
  }

  for (const check of of('revision')) {
    it(`hashes a revision as published: ${check.id} (${check.source})`, () => {
      const { directory, parents, author, committer, extra_headers, message } = check.inputs;
      expect(revisionSwhid({ directory, parents, author, committer, extraHeaders: extra_headers, message })).toBe(
        check.expected.swhid,
      );
    });
  }

  for (const check of of('release')) {
    it(`hashes a release as published: ${check.id} (${check.source})`, () => {
      const { target, target_type, name, tagger, message } = check.inputs;
      expect(releaseSwhid({ target, targetType: target_type, name, tagger, message })).toBe(check.expected.swhid);
    });
  }

  for (const check of checks.filter(({ inputs }) => inputs.branches !== undefined)) {
    it(`hashes a snapshot as published: ${check.id} (${check.source})`, () => {
      expect(snapshotSwhid(check.inputs.branches as Record<string, SnapshotBranch>)).toBe(check.expected.swhid);
    });
  }

  for (const check of of('syntax').filter(({ inputs }) => inputs.string !== undefined)) {
    it(`${check.expected.valid ? 'reads' : 'refuses'} ${check.inputs.string} (${check.source})`, () => {
      const read = parseSwhid(check.inputs.string);
      expect(read !== null).toBe(check.expected.valid);
      if (check.expected.type !== undefined)
        expect(read).toMatchObject({ type: check.expected.type, hash: check.expected.hash });
    });
  }

  it('names qualifiers that say nothing about their object (SWHID specification 1.2, section 6)', () => {
    const check = checks.find(({ id }) => id === 'swhid-qual-ignored')!;
    const ignored = (check.inputs.strings as string[]).map((text) => ignoredQualifiers(parseSwhid(text)!));
    expect(ignored).toEqual(check.expected.ignored_qualifiers);
  });

  for (const check of of('real repository')) {
    it(`spells the ids of ${check.inputs.repository} as published: ${check.id}`, () => {
      expect(printSwhid('rev', check.inputs.commit)).toBe(check.expected.rev);
      expect(parseSwhid(check.expected.dir)?.type).toBe('dir');
      expect(parseSwhid(check.expected.cnt)?.type).toBe('cnt');
    });
  }

  it('gives a content the id that git gives its blob', () => {
    // Pro Git, "Git Internals - Git Objects".
    expect(objectId('blob', Buffer.from('what is up, doc?'))).toBe('bd9dbf5aae1a3862dd1526723246b20206e5fc37');
  });
});

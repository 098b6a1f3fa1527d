/**
 * Software hash identifiers: the same content has the same identifier wherever it lies.
 * Pure hashing; equal to git's own object ids for contents, directories, revisions and releases.
 * @source SWHID specification 1.2 (ISO/IEC 18670:2025)
 */
import { createHash } from 'node:crypto';
import { objectId } from './git-object.ts';

export type SwhidType = 'cnt' | 'dir' | 'rev' | 'rel' | 'snp';

export interface Swhid {
  readonly type: SwhidType;
  /** 40 lower-case hexadecimal digits. */
  readonly hash: string;
  /** Qualifiers in the order written: `origin`, `visit`, `anchor`, `path`, `lines`, `bytes`. */
  readonly qualifiers: Readonly<Record<string, string>>;
}

export function printSwhid(type: SwhidType, hash: string): string {
  return `swh:1:${type}:${hash}`;
}

/** Section 5.2. */
export function contentSwhid(bytes: Uint8Array): string {
  return printSwhid('cnt', objectId('blob', bytes));
}

export interface DirectoryEntry {
  readonly type: 'file' | 'executable' | 'link' | 'dir' | 'rev';
  readonly name: string | Uint8Array;
  /** Hash of the entry, 40 hexadecimal digits. */
  readonly id: string;
}

const MODES = { file: '100644', executable: '100755', link: '120000', dir: '40000', rev: '160000' } as const;

/** Section 5.3. Entries may come in any order; a folder sorts as if its name ended in `/`. */
export function directorySwhid(entries: readonly DirectoryEntry[]): string {
  const raw = entries
    .map(({ type, name, id }) => {
      const bytes = Buffer.from(name as string);
      return { type, bytes, id, sorts: type === 'dir' ? Buffer.concat([bytes, Buffer.from('/')]) : bytes };
    })
    .sort((a, b) => Buffer.compare(a.sorts, b.sorts))
    .flatMap(({ type, bytes, id }) => [
      Buffer.from(`${MODES[type]} `),
      bytes,
      Buffer.from([0]),
      Buffer.from(id, 'hex'),
    ]);
  return printSwhid('dir', objectId('tree', Buffer.concat(raw)));
}

export interface RevisionParts {
  readonly directory: string;
  readonly parents: readonly string[];
  /** `Name <email> seconds offset`, the offset as written (`-0000` is not `+0000`). */
  readonly author: string;
  readonly committer: string;
  readonly extraHeaders?: readonly (readonly [string, string])[];
  /** null when there is none at all, which is not the same as an empty one. */
  readonly message: string | Uint8Array | null;
}

/** Section 5.4. */
export function revisionSwhid(parts: RevisionParts): string {
  const lines = [
    `tree ${parts.directory}`,
    ...parts.parents.map((parent) => `parent ${parent}`),
    `author ${parts.author}`,
    `committer ${parts.committer}`,
    ...(parts.extraHeaders ?? []).map(header),
  ];
  return printSwhid('rev', objectId('commit', manifestBytes(lines, parts.message)));
}

export interface ReleaseParts {
  readonly target: string;
  readonly targetType: 'commit' | 'tree' | 'blob' | 'tag';
  readonly name: string;
  readonly tagger: string | null;
  readonly message: string | Uint8Array | null;
}

/** Section 5.5. */
export function releaseSwhid(parts: ReleaseParts): string {
  const lines = [
    `object ${parts.target}`,
    `type ${parts.targetType}`,
    `tag ${parts.name}`,
    ...(parts.tagger === null ? [] : [`tagger ${parts.tagger}`]),
  ];
  return printSwhid('rel', objectId('tag', manifestBytes(lines, parts.message)));
}

export interface SnapshotBranch {
  readonly type: 'content' | 'directory' | 'revision' | 'release' | 'snapshot' | 'alias' | 'dangling';
  /** Hash, or the name of another branch for an alias; empty for a dangling one. */
  readonly target: string;
}

/** Section 5.6. Branches are sorted by the bytes of their names. */
export function snapshotSwhid(branches: Readonly<Record<string, SnapshotBranch>>): string {
  const raw = Object.entries(branches)
    .map(([name, branch]) => ({ name: Buffer.from(name), branch }))
    .sort((a, b) => Buffer.compare(a.name, b.name))
    .flatMap(({ name, branch }) => {
      const target =
        branch.type === 'alias'
          ? Buffer.from(branch.target)
          : branch.type === 'dangling'
            ? Buffer.alloc(0)
            : Buffer.from(branch.target, 'hex');
      return [Buffer.from(`${branch.type} `), name, Buffer.from(`\0${target.length}:`), target];
    });
  const bytes = Buffer.concat(raw);
  return printSwhid('snp', createHash('sha1').update(`snapshot ${bytes.length}\0`).update(bytes).digest('hex'));
}

const QUALIFIERS: Readonly<Record<string, RegExp>> = {
  origin: /^[^;]+$/,
  visit: /^swh:1:snp:[0-9a-f]{40}$/,
  anchor: /^swh:1:(dir|rev|rel|snp):[0-9a-f]{40}$/,
  path: /^[^;]+$/,
  lines: /^\d+(-\d+)?$/,
  bytes: /^\d+(-\d+)?$/,
};

/** Section 6. @returns null for text that is no identifier */
export function parseSwhid(text: string): Swhid | null {
  const [core = '', ...rest] = text.split(';');
  const match = /^swh:1:(cnt|dir|rev|rel|snp):([0-9a-f]{40})$/.exec(core);
  if (match === null) return null;
  const qualifiers: Record<string, string> = {};
  for (const part of rest) {
    const equals = part.indexOf('=');
    const name = part.slice(0, equals);
    const value = part.slice(equals + 1);
    if (equals < 0 || Object.hasOwn(qualifiers, name) || QUALIFIERS[name]?.test(value) !== true) return null;
    qualifiers[name] = value;
  }
  return { type: match[1] as SwhidType, hash: match[2]!, qualifiers };
}

/** Qualifiers that say nothing about an object of this type: lines of what is no content, a visit without an origin, ... */
export function ignoredQualifiers({ type, qualifiers }: Swhid): string[] {
  return Object.keys(qualifiers).filter(
    (name) =>
      ((name === 'lines' || name === 'bytes') && type !== 'cnt') ||
      (name === 'visit' && qualifiers.origin === undefined) ||
      (name === 'anchor' && qualifiers.path === undefined),
  );
}

/** Continuation lines of a header begin with a space. */
function header([name, value]: readonly [string, string]): string {
  return `${name} ${value.replaceAll('\n', '\n ')}`;
}

function manifestBytes(lines: readonly string[], message: string | Uint8Array | null): Uint8Array {
  const head = Buffer.from(`${lines.join('\n')}\n`);
  return message === null ? head : Buffer.concat([head, Buffer.from('\n'), Buffer.from(message as string)]);
}

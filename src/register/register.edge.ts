/** The register of one code: records added, entries and notices read. Ties the files, the index and the chain together. */
import { userInfo } from 'node:os';
import { join } from 'node:path';
import { registerState, type StandingEntry, type StandingNotice } from './chain.ts';
import { plainYaml } from './plain-yaml.ts';
import { readRecord } from './read-record.ts';
import {
  type Entry,
  fileOf,
  type Lifting,
  type Notice,
  nameFor,
  type Person,
  type RecordKind,
  type RegisterRecord,
  type Remaking,
  type Seal,
  seal,
  type Withdrawal,
} from './record.ts';
import { listRecordFiles, REGISTER_FOLDER, readRecordBytes, writeRecordFile } from './register-files.edge.ts';
import { openRegisterIndex, type RegisterIndex } from './register-index.edge.ts';

/** What a new record says; name, seal and chain are made here. */
export interface Draft {
  readonly kind: RecordKind;
  /** The entry or notice that it speaks of; absent for a new one. */
  readonly about?: string;
  readonly replaces?: Seal;
  readonly by: Person;
  /** Title that a new name is made from. */
  readonly title?: string;
  readonly content: Entry | Notice | Withdrawal | Remaking | Lifting;
  /** For tests; now when absent. */
  readonly written?: Date;
}

export class Register {
  /** Absolute path of the register's folder. */
  readonly folder: string;
  private opened: RegisterIndex | null = null;
  private readonly sign: ((seal: string) => string) | null;

  /**
   * @param root  absolute path of the code's repository
   * @param sign  makes the signature of a seal; records are not signed without
   */
  constructor(root: string, sign: ((seal: string) => string) | null = null) {
    this.folder = join(root, REGISTER_FOLDER);
    this.sign = sign;
  }

  /** The index, brought up to date. */
  index(say?: (done: number, total: number) => void): RegisterIndex {
    this.opened ??= openRegisterIndex(this.folder, say);
    return this.opened;
  }

  /**
   * Seals a record and writes it.
   *
   * @returns the record, once it is safely on disk
   * @throws {NodeJS.ErrnoException} from the file system, or what `sign` throws; nothing was written then
   */
  add(draft: Draft): RegisterRecord<object> {
    const written = (draft.written ?? new Date()).toISOString();
    const about =
      draft.about ??
      nameFor(
        written,
        draft.title ?? '',
        `${written} ${process.pid} ${Math.random()} ${JSON.stringify(draft.content)}`,
      );
    // Through JSON once: what is sealed is exactly what the file will hold.
    const content = JSON.parse(JSON.stringify(draft.content)) as object;
    const sealed = seal<object>({
      format: 'mortise record 1',
      kind: draft.kind,
      about,
      ...(draft.replaces === undefined ? {} : { replaces: draft.replaces }),
      follows: this.index().tips(),
      written,
      by: draft.by,
      content,
    });
    const record = this.sign === null ? sealed : { ...sealed, signature: this.sign(sealed.seal) };
    writeRecordFile(this.folder, fileOf(record), plainYaml(JSON.parse(JSON.stringify(record))));
    this.close();
    return record;
  }

  /** An entry with all its records; null when there is none of this name. A beginning of a name is enough when it is the only one. */
  entry(name: string): StandingEntry | null {
    return this.stateOf(name).entries.values().next().value ?? null;
  }

  notices(): StandingNotice[] {
    const files = listRecordFiles(this.folder).filter((file) => /\.(?:notice|lifting)\.[0-9a-f]{8}\.yaml$/.test(file));
    return [...registerState(this.read(files)).notices.values()].sort((a, b) => (a.id < b.id ? 1 : -1));
  }

  /** Every entry, one after another: for questions that no index answers. */
  *entries(): Generator<StandingEntry> {
    const byName = new Map<string, string[]>();
    for (const file of listRecordFiles(this.folder)) {
      const name = nameIn(file);
      byName.set(name, [...(byName.get(name) ?? []), file]);
    }
    for (const files of byName.values()) yield* registerState(this.read(files)).entries.values();
  }

  close(): void {
    this.opened?.close();
    this.opened = null;
  }

  private stateOf(name: string) {
    const files = listRecordFiles(this.folder);
    const names = new Set(files.map(nameIn));
    const meant = names.has(name) ? [name] : [...names].filter((one) => one.startsWith(name));
    return registerState(meant.length === 1 ? this.read(files.filter((file) => nameIn(file) === meant[0])) : []);
  }

  private read(files: readonly string[]) {
    return files.map((file) => readRecord(file, readRecordBytes(this.folder, file)));
  }
}

function nameIn(file: string): string {
  return file.slice(file.lastIndexOf('/') + 1).replace(/\.[a-z]+\.[0-9a-f]{8}\.yaml$/, '');
}

/** Who writes a record when nobody is named: the author that git is set to, else the user of the machine. */
export function writerFrom(env: Readonly<Record<string, string | undefined>>): Person {
  return { name: env.GIT_AUTHOR_NAME ?? userInfo().username };
}

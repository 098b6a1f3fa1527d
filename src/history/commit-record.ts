/** One commit as the log tells it: who, when, why, and which files differ from all of its parents. Pure. */
import { decodeText } from '../sources/git-object.ts';
import { pathFromBytes } from '../sources/git-path.ts';

export interface CommitRecord {
  readonly id: string;
  readonly parents: readonly string[];
  readonly author: string;
  readonly email: string;
  /** When it was written and when it was committed, seconds since 1970. */
  readonly authored: number;
  readonly seconds: number;
  readonly subject: string;
  readonly files: readonly FileChange[];
}

/**
 * A file that a commit changed. Of a merge only those that differ from every parent: what was taken over from one of them
 * unchanged was told by the commit that made it.
 */
export interface FileChange {
  readonly path: string;
  /** Blob id for each parent, in their order; null where that parent has no such file. One entry for a root. */
  readonly before: readonly (string | null)[];
  /** null when the file is gone. */
  readonly after: string | null;
}

/** `git log` words whose output {@link LogParser} reads. Renames are not looked for: that would need contents a clone may lack. */
export const LOG_WORDS: readonly string[] = [
  'log',
  '--topo-order',
  '-c',
  '--raw',
  '--root',
  '--no-renames',
  '--no-abbrev',
  '--no-ext-diff',
  '--no-textconv',
  '--no-show-signature',
  '--no-notes',
  '--no-color',
  '-z',
  '--format=%x01%H%x02%P%x02%at%x02%ct%x02%an%x02%ae%x02%s',
];

/** Takes log output in chunks of any size; gives commits as they are complete. */
export class LogParser {
  private readonly wanted: (path: string) => boolean;
  private readonly give: (commit: CommitRecord) => void;
  private rest: Buffer = Buffer.alloc(0);
  private current: { head: Omit<CommitRecord, 'files'>; files: FileChange[] } | null = null;
  private raw: string | null = null;

  constructor(wanted: (path: string) => boolean, give: (commit: CommitRecord) => void) {
    this.wanted = wanted;
    this.give = give;
  }

  push(chunk: Buffer): void {
    const buffer = this.rest.length === 0 ? chunk : Buffer.concat([this.rest, chunk]);
    let at = 0;
    for (let end = buffer.indexOf(0, at); end >= 0; end = buffer.indexOf(0, at)) {
      this.piece(buffer.subarray(at, end));
      at = end + 1;
    }
    this.rest = Buffer.from(buffer.subarray(at));
  }

  /** Call at the end of the output: the last commit has no successor to close it. */
  end(): void {
    if (this.rest.length > 0) this.piece(this.rest);
    this.close();
  }

  private piece(bytes: Buffer): void {
    if (this.raw !== null) {
      this.file(this.raw, pathFromBytes(bytes));
      this.raw = null;
      return;
    }
    // An empty piece, or a line end, separates a commit's message from its files.
    let from = 0;
    while (from < bytes.length && bytes[from] === 10) from += 1;
    if (from === bytes.length) return;
    if (bytes[from] === 1) this.head(bytes.subarray(from + 1));
    else if (bytes[from] === 0x3a) this.raw = bytes.toString('latin1', from);
  }

  private head(bytes: Buffer): void {
    this.close();
    const fields: Buffer[] = [];
    let at = 0;
    for (let count = 0; count < 6; count += 1) {
      const end = bytes.indexOf(2, at);
      fields.push(bytes.subarray(at, end));
      at = end + 1;
    }
    const text = (index: number) => fields[index]!.toString('latin1');
    this.current = {
      head: {
        id: text(0),
        parents: text(1) === '' ? [] : text(1).split(' '),
        authored: Number(text(2)),
        seconds: Number(text(3)),
        author: decodeText(fields[4]!),
        email: decodeText(fields[5]!),
        subject: decodeText(bytes.subarray(at)),
      },
      files: [],
    };
  }

  /** `:mode mode id id status`, with a colon, a mode and an id more for each further parent of a merge. */
  private file(raw: string, path: string): void {
    if (this.current === null || !this.wanted(path)) return;
    const parents = /^:+/.exec(raw)![0].length;
    const words = raw.slice(parents).split(' ');
    const modes = words.slice(0, parents + 1);
    const ids = words.slice(parents + 1, 2 * parents + 2);
    const blob = (index: number) => (isFile(modes[index]!) ? ids[index]! : null);
    const before = Array.from({ length: parents }, (_, index) => blob(index));
    const after = blob(parents);
    if (after === null && before.every((id) => id === null)) return;
    this.current.files.push({ path, before, after });
  }

  private close(): void {
    if (this.current !== null) this.give({ ...this.current.head, files: this.current.files });
    this.current = null;
  }
}

/** Links and submodules are no source. */
function isFile(mode: string): boolean {
  return mode.startsWith('100');
}

/** One long-lived `git cat-file --batch`: objects by id, as bytes. */
import type { ChildProcessWithoutNullStreams } from 'node:child_process';
import type { RepositoryPlace } from './find-repository.edge.ts';
import { gitAbsent, startGit } from './git.edge.ts';
import { ObjectStream } from './object-stream.ts';

export interface GitObject {
  readonly type: 'blob' | 'tree' | 'commit' | 'tag';
  readonly bytes: Uint8Array;
}

/** No source file is longer; reading on would fill the memory with what no reader wants. */
export const LARGEST_OBJECT_BYTES = 512 * 1024 * 1024;

interface Waiting {
  done(object: GitObject | null): void;
  fail(error: unknown): void;
}

export class ObjectReader {
  private readonly place: RepositoryPlace;
  private child: ChildProcessWithoutNullStreams | null = null;
  private waiting: Waiting[] = [];

  constructor(place: RepositoryPlace) {
    this.place = place;
  }

  /** @returns null when the repository lacks the object, or it is longer than {@link LARGEST_OBJECT_BYTES} */
  read(id: string): Promise<GitObject | null> {
    if (!/^[0-9a-f]{40,64}$/.test(id)) return Promise.resolve(null);
    const child = this.child ?? this.start();
    return new Promise((done, fail) => {
      if (this.waiting.length === 0) hold(child, true);
      this.waiting.push({ done, fail });
      child.stdin.write(`${id}\n`);
    });
  }

  close(): void {
    this.child?.stdin.end();
    this.child = null;
  }

  private start(): ChildProcessWithoutNullStreams {
    const child = startGit(this.place, 'objects', ['cat-file', '--batch']);
    const stream = new ObjectStream(LARGEST_OBJECT_BYTES, (object) => {
      const next = this.waiting.shift();
      if (this.waiting.length === 0) hold(child, false);
      next?.done(object.bytes === null ? null : { type: object.type as GitObject['type'], bytes: object.bytes });
    });
    const end = (error: unknown) => {
      if (this.child === child) this.child = null;
      for (const one of this.waiting.splice(0)) one.fail(error);
    };
    child.on('error', (cause) => end(gitAbsent(cause)));
    child.on('close', () => end(new Error('git cat-file ended before it answered')));
    child.stdin.on('error', () => {});
    child.stderr.resume();
    child.stdout.on('data', (chunk: Buffer) => stream.push(chunk));
    this.child = child;
    hold(child, false);
    return child;
  }
}

/** An idle reader must not keep the program alive. */
function hold(child: ChildProcessWithoutNullStreams, held: boolean): void {
  const parts = [child, child.stdin, child.stdout, child.stderr] as unknown as { ref?(): void; unref?(): void }[];
  for (const part of parts) {
    if (held) part.ref?.();
    else part.unref?.();
  }
}

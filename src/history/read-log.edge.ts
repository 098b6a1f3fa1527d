/** Streams the log of a range out of git. */
import { gitAbsent, startGit } from '../sources/git.edge.ts';
import type { CommitRange, Repository } from '../sources/repository.edge.ts';
import { type CommitRecord, LOG_WORDS, LogParser } from './commit-record.ts';

export interface Log {
  /** Parents before children. */
  readonly commits: readonly CommitRecord[];
  /** What git said when it could not go on: a treeless clone lacks folders. null when it came to the end. */
  readonly broken: string | null;
}

/** `all` tells of merges what differs from every parent. */
export type LogSort = 'all' | 'merges against the first parent';

/** @param wanted  paths to keep; the log itself is read whole */
export function readLog(
  repository: Repository,
  range: CommitRange,
  wanted: (path: string) => boolean,
  sort: LogSort = 'all',
): Promise<Log> {
  const log =
    sort === 'all'
      ? LOG_WORDS
      : LOG_WORDS.flatMap((word) => (word === '-c' ? ['--merges', '--diff-merges=first-parent'] : [word]));
  const words = [...log, range.to, ...(range.from === null ? [] : [`^${range.from}`])];
  return new Promise((done, fail) => {
    const child = startGit(repository.place, 'objects', words);
    const commits: CommitRecord[] = [];
    const parser = new LogParser(wanted, (commit) => commits.push(commit));
    let err = '';
    child.on('error', (cause) => fail(gitAbsent(cause)));
    child.stdin.on('error', () => {});
    child.stdin.end();
    child.stdout.on('data', (chunk: Buffer) => parser.push(chunk));
    child.stderr.on('data', (chunk: Buffer) => {
      if (err.length < 2_000) err += chunk.toString('utf8');
    });
    child.on('close', (status) => {
      parser.end();
      done({ commits: commits.reverse(), broken: status === 0 ? null : err.trim() });
    });
  });
}

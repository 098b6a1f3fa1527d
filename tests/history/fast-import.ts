/** Histories of any length, made through one `git fast-import`. */
import { spawnSync } from 'node:child_process';
import { temporaryFolder } from '../sources/repositories.ts';

export interface MadeCommit {
  readonly subject: string;
  /** Places of its parents in the list; the commit before it when absent. */
  readonly parents?: readonly number[];
  /** Path to content; null removes. */
  readonly files: Readonly<Record<string, string | null>>;
}

/** A bare repository whose branch `main` ends at the last commit. Commits are an hour apart. */
export function importHistory(commits: Iterable<MadeCommit>, tags: Readonly<Record<string, number>> = {}): string {
  const root = temporaryFolder();
  const git = (words: string[], input?: string | Buffer) => {
    const done = spawnSync('git', words, {
      cwd: root,
      ...(input === undefined ? {} : { input }),
      env: { PATH: process.env.PATH, HOME: root, GIT_CONFIG_NOSYSTEM: '1' },
      maxBuffer: 1 << 28,
    });
    if (done.status !== 0) throw new Error(`git ${words[0]}: ${done.stderr.toString()}`);
  };
  git(['init', '-q', '--bare', '-b', 'main']);
  const parts: string[] = [];
  let index = 0;
  for (const { subject, parents, files } of commits) {
    const [first, ...others] = parents ?? (index === 0 ? [] : [index - 1]);
    parts.push(
      `commit refs/heads/main\nmark :${index + 1}\nauthor A <a@example.org> ${1_500_000_000 + index * 3600} +0000\n`,
      `committer A <a@example.org> ${1_500_000_000 + index * 3600} +0000\n${data(subject)}`,
    );
    if (first !== undefined) parts.push(`from :${first + 1}\n`);
    for (const other of others) parts.push(`merge :${other + 1}\n`);
    for (const [path, content] of Object.entries(files)) {
      parts.push(content === null ? `D ${path}\n` : `M 100644 inline ${path}\n${data(content)}`);
    }
    parts.push('\n');
    index += 1;
  }
  for (const [name, place] of Object.entries(tags)) parts.push(`reset refs/tags/${name}\nfrom :${place + 1}\n\n`);
  git(['fast-import', '--quiet', '--done', '--force'], `${parts.join('')}done\n`);
  return root;
}

function data(text: string): string {
  return `data ${Buffer.byteLength(text)}\n${text}\n`;
}

/** Small repositories to read from, made in a temporary folder with git itself. */
import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, realpathSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';

export interface TestRepository {
  readonly root: string;
  git(...words: string[]): string;
  write(path: string, content: string | Uint8Array): void;
  /** Commits everything as it lies, a day after the commit before. */
  commit(message: string): string;
}

export function temporaryFolder(): string {
  return realpathSync(mkdtempSync(join(tmpdir(), 'mortise-test-')));
}

export function makeRepository(...initWords: string[]): TestRepository {
  const root = temporaryFolder();
  let day = 0;
  const git = (...words: string[]) => {
    const date = `2020-01-01T00:00:00Z`;
    const stamp = new Date(Date.parse(date) + day * 86_400_000).toISOString();
    return execFileSync('git', ['-c', 'protocol.file.allow=always', ...words], {
      cwd: root,
      encoding: 'utf8',
      stdio: ['ignore', 'pipe', 'pipe'],
      env: {
        PATH: process.env.PATH,
        HOME: root,
        GIT_CONFIG_NOSYSTEM: '1',
        GIT_AUTHOR_NAME: 'A. Author',
        GIT_AUTHOR_EMAIL: 'a@example.org',
        GIT_COMMITTER_NAME: 'A. Author',
        GIT_COMMITTER_EMAIL: 'a@example.org',
        GIT_AUTHOR_DATE: stamp,
        GIT_COMMITTER_DATE: stamp,
      },
    }).trim();
  };
  const repository: TestRepository = {
    root,
    git,
    write(path, content) {
      mkdirSync(dirname(join(root, path)), { recursive: true });
      writeFileSync(join(root, path), content);
    },
    commit(message) {
      git('add', '-A');
      git('commit', '-q', '--allow-empty', '-m', message);
      day += 1;
      return git('rev-parse', 'HEAD');
    },
  };
  git('init', '-q', '-b', 'main', ...initWords);
  return repository;
}

// Installs what the lock file names when node_modules is missing or older than it, so that the first command on a fresh clone works.
import { execSync } from 'node:child_process';
import { existsSync, statSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = join(dirname(fileURLToPath(import.meta.url)), '..');
const mark = join(root, 'node_modules/.installed-from-lock');
const lock = join(root, 'package-lock.json');
if (!existsSync(mark) || statSync(mark).mtimeMs < statSync(lock).mtimeMs) {
  execSync('npm ci --no-audit --no-fund --loglevel=error', { cwd: root, stdio: ['ignore', 2, 2] });
  writeFileSync(mark, '');
}

/** What results owe to the machine: system, processor, C library, and the programs that build and run. */
import { execFile } from 'node:child_process';
import { accessSync, constants, realpathSync, statSync } from 'node:fs';
import { cpus, release } from 'node:os';
import { basename, delimiter, join } from 'node:path';

export interface Machine {
  readonly system: string;
  readonly processor: string;
  readonly library: string | null;
}

let machine: Machine | undefined;

export function thisMachine(): Machine {
  machine ??= {
    system: `${process.platform} ${process.arch} ${release()}`,
    processor: cpus()[0]?.model.trim() ?? 'unknown',
    library: libraryVersion(),
  };
  return machine;
}

function libraryVersion(): string | null {
  try {
    const report = process.report as unknown as { excludeNetwork?: boolean; getReport(): unknown };
    report.excludeNetwork = true;
    const { header } = report.getReport() as { header: { glibcVersionRuntime?: string } };
    return header.glibcVersionRuntime === undefined ? null : `glibc ${header.glibcVersionRuntime}`;
  } catch {
    return null;
  }
}

export interface Program {
  readonly name: string;
  /** Absolute, with links followed. */
  readonly path: string;
  readonly bytes: number;
  readonly modified: number;
}

/** Where PATH finds a program; null when it does not. A name with `/` is not looked up. */
export function findProgram(name: string, path: string | undefined): Program | null {
  if (name.includes('/')) return null;
  for (const folder of (path ?? '').split(delimiter)) {
    if (folder === '') continue;
    try {
      const file = join(folder, name);
      accessSync(file, constants.X_OK);
      const stat = statSync(file);
      if (stat.isFile()) return { name, path: realpathSync(file), bytes: stat.size, modified: stat.mtimeMs };
    } catch {
      // Not here.
    }
  }
  return null;
}

// Only programs known to answer `--version` and do nothing else; any other could take the word for a task.
const ANSWERS_VERSION =
  /^(node|python3?(\.\d+)?|gfortran(-\d+)?|gcc(-\d+)?|g\+\+(-\d+)?|clang(\+\+)?(-\d+)?|flang(-new)?(-\d+)?|ifx|ifort|icx|nvfortran|mpirun|mpiexec|srun|mpif90|mpicc|cmake|make|ninja|julia|perl|bash)$/;

/** First line of what a program says of its version; null when it is not known to answer. */
export function versionOf(program: Program): Promise<string | null> {
  if (!ANSWERS_VERSION.test(basename(program.name))) return Promise.resolve(null);
  return new Promise((resolve) => {
    execFile(program.path, ['--version'], { timeout: 5000 }, (error, stdout) => {
      resolve(error !== null && stdout === '' ? null : (stdout.split('\n')[0] ?? '').trim().slice(0, 200));
    });
  });
}

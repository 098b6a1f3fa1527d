/** gfortran asked for its parse tree. */
import { spawn } from 'node:child_process';

/**
 * @param args  files and options of the compiler
 * @param cwd   where module files are written and looked for
 * @returns the dump, and what it complained about; `accepted` is false where it found an error
 */
export function dumpParseTree(
  args: readonly string[],
  cwd: string,
): Promise<{ readonly accepted: boolean; readonly dump: string; readonly complaints: string }> {
  return new Promise((resolve, reject) => {
    const child = spawn('gfortran', ['-fsyntax-only', '-fdump-fortran-original', '-w', '-std=legacy', ...args], {
      cwd,
    });
    const [dump, complaints]: Buffer[][] = [[], []];
    child.stdout.on('data', (chunk: Buffer) => dump!.push(chunk));
    child.stderr.on('data', (chunk: Buffer) => complaints!.push(chunk));
    child.on('error', reject);
    child.on('close', (code) =>
      resolve({
        accepted: code === 0,
        dump: Buffer.concat(dump!).toString('latin1'),
        complaints: Buffer.concat(complaints!).toString('latin1'),
      }),
    );
  });
}

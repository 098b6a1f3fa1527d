/** Tools that some tests judge against. Missing ones skip those tests by name and reason; under CI a skip is a failure. */
import { spawnSync } from 'node:child_process';
import { describe, it } from 'vitest';

const found = new Map<string, boolean>();

/** True when the tool answers `--version`, or, for `python3:numpy`, when Python imports the module. */
export function hasTool(tool: string): boolean {
  if (!found.has(tool)) found.set(tool, probe(tool));
  return found.get(tool)!;
}

/** A `describe` that runs when every tool is there, and says which is not when it skips. Throws under CI. */
export function describeWith(tools: readonly string[], title: string, body: () => void): void {
  const missing = tools.filter((tool) => !hasTool(tool));
  if (missing.length === 0) {
    describe(title, body);
  } else if (process.env.CI === 'true') {
    describe(title, () => {
      it(`finds ${missing.join(', ')}`, () => {
        throw new Error(`${missing.join(', ')} not found: under CI every tool must be there`);
      });
    });
  } else {
    describe.skip(`${title} (skipped: ${missing.join(', ')} not found)`, body);
  }
}

/** The Python of the system, which has Debian's python3-* packages even where another one comes first in PATH. */
export const PYTHON = spawnSync('/usr/bin/python3', ['--version']).status === 0 ? '/usr/bin/python3' : 'python3';

function probe(tool: string): boolean {
  // Slurm's programs alone are not enough: a node has to answer. start-slurm.sh brings one up.
  if (tool === 'slurm') {
    const told = spawnSync('sinfo', ['-h', '-o', '%T'], { timeout: 10_000, encoding: 'utf8' });
    return /idle|mixed|allocated/.test(told.stdout ?? '');
  }
  // It has no option that only tells its version; an unknown one ends it with a usage message.
  if (tool === 'ssh-keygen') return spawnSync(tool, ['-Y', 'check-novalidate']).error === undefined;
  const [program = tool, module] = tool.split(':');
  const command = program === 'python3' ? PYTHON : program;
  const words = module === undefined ? ['--version'] : ['-c', `import ${module}`];
  return spawnSync(command, words, { stdio: 'ignore' }).status === 0;
}

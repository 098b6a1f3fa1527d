/** `mortise demo`: lays the demo code with its history into a folder, audits it, shows the outcome. */
import { resolve } from 'node:path';
import { command as auditCommand } from './audit.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { FolderNotEmpty, freeFolder, layDemo } from './demo/demo-repository.edge.ts';
import { openOn } from './open.ts';

export const command: Command = {
  name: 'demo',
  answers: 'lays a small code with planted mistakes and audits it',
  usage: 'mortise demo [FOLDER]',
  options: {
    'lay-only': { type: 'boolean', says: 'lay the code and stop' },
    until: { type: 'string', value: 'STEP', says: 'lay its history up to this step of fixtures/demo/history.yaml' },
    ascii: { type: 'boolean', says: 'draw with ASCII characters only' },
  },
  help: `
The demo is a real code of a few hundred lines: one-dimensional gas dynamics of a shock that runs into a cold interstellar
cloud, with exchangeable modules and some years of history in which mistakes of daily life hide. It needs Node and git alone;
one old Fortran module joins in where gfortran is.

On a terminal the outcome is shown in the terminal UI, elsewhere as text. The audit is meant to end held: exit status 0
says that it ran to its end.`,
  async run(invocation, surroundings) {
    const [name, ...more] = invocation.words;
    if (more.length > 0) throw new UsageError('mortise demo takes one folder');
    const folder =
      name === undefined ? freeFolder(surroundings.cwd, 'cloud-shock-demo') : resolve(surroundings.cwd, name);
    const { until } = invocation.options;
    lay(folder, typeof until === 'string' ? until : undefined);
    surroundings.err(`The demo code lies in ${folder}\n`);
    if (invocation.options['lay-only'] === true) return EXIT.ok;
    return show(folder, invocation, surroundings);
  },
};

function lay(folder: string, until: string | undefined): void {
  try {
    layDemo(folder, until);
  } catch (error) {
    if (!(error instanceof FolderNotEmpty)) throw error;
    throw new UsageError(`${error.message}: name a folder that is not there yet`);
  }
}

async function show(folder: string, invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const there = { ...surroundings, cwd: folder };
  const status =
    surroundings.stdoutIsTerminal && invocation.options.plain !== true && invocation.options.json !== true
      ? await openOn({ words: [], options: { ascii: invocation.options.ascii } }, there, true)
      : await auditCommand.run({ words: [], options: { ...invocation.options, at: undefined } }, there);
  return status === EXIT.stop ? EXIT.ok : status;
}

/** `mortise` alone: opens the terminal UI on the assembly found from the working folder upward. */
import { manifestsUnreadable } from '../manifests/load-manifests.ts';
import { findingsText } from '../report/finding-text.ts';
import { wantsColour } from '../report/style.ts';
import { glyphsFor } from '../screens/glyphs.ts';
import { auditStatus } from './audit.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';
import { type OpenedCode, openCode } from './open-code.ts';
import { ScreenSession } from './screen-session.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'open',
  answers: 'opens the terminal UI on the assembly found from the working folder upward',
  usage: 'mortise [--ascii] [--plain]',
  options: {
    ascii: { type: 'boolean', says: 'draw with ASCII characters only' },
    'no-run': { type: 'boolean', says: 'do not run the cases' },
  },
  help: `
Shows the assembly, its joints, the history of its modules, its cases and deviations, the register and all findings.
The letter before each name at the foot goes there; "?" shows the keys of the screen.

With --plain, or where the output is no terminal, each screen is printed once.`,
  async run(invocation, surroundings) {
    if (invocation.words.length > 0) throw new UsageError(`there is no command "${invocation.words[0]}"`);
    const opened = await openCode(invocation, surroundings);
    if (opened.place === null || manifestsUnreadable(opened.findings)) {
      surroundings.out(findingsText(opened.findings, textOptions(invocation, surroundings)));
      return EXIT.usage;
    }
    return openOn(opened, invocation, surroundings);
  },
};

export async function openOn(
  opened: OpenedCode,
  invocation: Invocation,
  surroundings: Surroundings,
): Promise<ExitStatus> {
  const session = new ScreenSession(opened, invocation, surroundings);
  const glyphs = glyphsFor(surroundings.env, invocation.options.ascii === true);
  if (invocation.options.plain === true || invocation.options.json === true || !surroundings.stdoutIsTerminal) {
    await session.audit();
    const { screensText } = await import('../screens/screens-text.ts');
    surroundings.out(
      invocation.options.json === true
        ? `${JSON.stringify(session.views(), null, 2)}\n`
        : screensText(session.views(), surroundings.columns, glyphs),
    );
  } else {
    const auditing = session.audit();
    const { openScreens } = await import('../screens/open-screens.edge.tsx');
    try {
      await openScreens(session, { glyphs, colour: wantsColour(surroundings.env, true, false) });
    } finally {
      session.close();
      await auditing;
    }
  }
  return session.result === null ? EXIT.interrupted : auditStatus(session.result);
}

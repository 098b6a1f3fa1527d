/** `mortise` alone: opens the terminal UI on the assembly found from the working folder upward. */
import { findAssembly } from '../manifests/manifest-files.edge.ts';
import { type Command, EXIT, type ExitStatus, type Invocation, type Surroundings, UsageError } from './command.ts';

export const command: Command = {
  name: 'open',
  answers: 'opens the terminal UI on the assembly found from the working folder upward',
  usage: 'mortise [--run] [--ascii] [--plain]',
  options: {
    ascii: { type: 'boolean', says: 'draw with ASCII characters only' },
    run: { type: 'boolean', says: 'begin every case at once; else only results kept from before are shown' },
  },
  help: `
Shows the assembly, its joints, the history of its modules, its cases and deviations, the register and all findings.
The first letter of each name at the top goes there; "?" shows the keys of the screen. No case runs before it is told to: "A"
on the cases screen begins them all.

With --plain, or where the output is no terminal, each screen is printed once.
Where no assembly is found, it offers to draft manifests from the sources.`,
  async run(invocation, surroundings) {
    if (invocation.words.length > 0) throw new UsageError(`there is no command "${invocation.words[0]}"`);
    return openOn(invocation, surroundings, invocation.options.run === true);
  },
};

/** @param runs  whether every case is run at once */
export async function openOn(invocation: Invocation, surroundings: Surroundings, runs: boolean): Promise<ExitStatus> {
  const { plain, json, at, assembly } = invocation.options;
  if (plain === true || json === true || !surroundings.stdoutIsTerminal) return printed(invocation, surroundings, runs);
  const given = typeof assembly === 'string' ? assembly : undefined;
  const place = findAssembly(surroundings.cwd, given);
  if (place === null && at === undefined && given === undefined) return offerDraft(invocation, surroundings);
  // An assembly that stands at a revision only has no files to follow.
  if (place === null) return printed(invocation, surroundings, runs);
  const [{ ScreenLink }, { openScreens }, { glyphsFor }, { wantsColour }] = await Promise.all([
    import('./screen-link.edge.ts'),
    import('../screens/open-screens.edge.ts'),
    import('../screens/glyphs.ts'),
    import('../report/style.ts'),
  ]);
  const link = new ScreenLink(place, invocation, surroundings, runs);
  try {
    const glyphs = glyphsFor(surroundings.env, invocation.options.ascii === true);
    await openScreens(link, { glyphs, colour: wantsColour(surroundings.env, true, false) });
  } finally {
    await link.close();
  }
  if (link.unreadable !== null) surroundings.out(link.unreadable);
  return link.status ?? EXIT.interrupted;
}

/** Every screen once, as text or as one document. */
async function printed(invocation: Invocation, surroundings: Surroundings, runs: boolean): Promise<ExitStatus> {
  const [{ openCode }, { manifestsUnreadable }, { findingsText }, { textOptions }, { ScreenSession }, { auditStatus }] =
    await Promise.all([
      import('./open-code.ts'),
      import('../manifests/load-manifests.ts'),
      import('../report/finding-text.ts'),
      import('./text-options.ts'),
      import('./screen-session.ts'),
      import('./audit.ts'),
    ]);
  const opened = await openCode(invocation, surroundings);
  if (opened.place === null || manifestsUnreadable(opened.findings)) {
    surroundings.out(
      invocation.options.json === true
        ? `${JSON.stringify({ findings: opened.findings }, null, 2)}\n`
        : findingsText(opened.findings, textOptions(invocation, surroundings)),
    );
    return EXIT.usage;
  }
  const session = new ScreenSession(opened, invocation, surroundings);
  await session.audit(() => runs);
  const views = session.views();
  if (invocation.options.json === true) surroundings.out(`${JSON.stringify(views, null, 2)}\n`);
  else {
    const [{ screensText }, { glyphsFor }] = await Promise.all([
      import('../screens/screens-text.ts'),
      import('../screens/glyphs.ts'),
    ]);
    const glyphs = glyphsFor(surroundings.env, invocation.options.ascii === true);
    surroundings.out(screensText(views, surroundings.columns, glyphs));
  }
  return session.result === null ? EXIT.interrupted : auditStatus(session.result);
}

/** Nothing is written before the user says so. */
async function offerDraft(invocation: Invocation, surroundings: Surroundings): Promise<ExitStatus> {
  const { askLine } = await import('./ask-line.edge.ts');
  surroundings.out('There is no manifests/assembly.yaml here or in any folder above.\n');
  const said = await askLine('Draft manifests from the sources below this folder? Type yes: ', surroundings);
  if (said.trim() !== 'yes') {
    surroundings.out(
      'Nothing was written.\nNext: go into the code, or name the assembly with --assembly FILE; "mortise review" and "mortise drift" work without manifests.\n',
    );
    return EXIT.usage;
  }
  const { command: draft } = await import('./draft.ts');
  const status = await draft.run({ words: [], options: {} }, surroundings);
  return status === EXIT.ok ? openOn(invocation, surroundings, false) : status;
}

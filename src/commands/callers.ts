/** `mortise callers [PATH…]`: does every call fit what it calls. */
import { hasStop } from '../model/finding.ts';
import { checkCode } from '../readers/callers/check-code.ts';
import { findingsText } from '../report/finding-text.ts';
import { openTree } from '../sources/open-tree.edge.ts';
import { type Command, EXIT } from './command.ts';
import { promotedIn, REAL_BYTES } from './promotion.ts';
import { DEFINE, readPaths } from './read-paths.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'callers',
  answers: 'does every call fit what it calls, in all of the code',
  usage: 'mortise callers [PATH…] [--at REV]',
  options: {
    define: DEFINE,
    'real-bytes': REAL_BYTES,
  },
  help: `
Reads every source file, or those under the paths, and holds each call against the definition: number of arguments, keywords,
types and kinds, constants passed for outputs, arguments of one type that look exchanged; COMMON blocks of one name against
each other; prototypes and interface blocks against definitions; Fortran against C. Where a name has several providers a call
is only wrong when it fits none. What old codes do on purpose is told once a callee, as a note.

Exit status: 0 nothing of gravity stop, 1 at least one stop, 2 wrong usage.`,
  async run(invocation, surroundings) {
    const words = invocation.words.length === 0 ? ['.'] : invocation.words;
    const { files, revision } = await readPaths(words, invocation, surroundings);
    if (surroundings.signal.aborted) return EXIT.interrupted;
    const { at } = invocation.options;
    const tree = await openTree(surroundings.cwd, typeof at === 'string' ? at : undefined);
    const { promote, says } = await promotedIn(tree, invocation, surroundings);
    const findings = checkCode(new Map(Object.entries(files)), { promote });
    surroundings.out(
      invocation.options.json === true
        ? `${JSON.stringify({ document: 'mortise callers', revision, files: Object.keys(files).length, promote, findings }, null, 2)}\n`
        : `${Object.keys(files).length} files read\n${says === '' ? '' : `${says}\n`}\n${findingsText(findings, textOptions(invocation, surroundings))}`,
    );
    return hasStop(findings) ? EXIT.stop : EXIT.ok;
  },
};

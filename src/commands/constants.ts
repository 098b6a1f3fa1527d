/** `mortise constants [PATH…]`: which physical constants a code carries, of which edition, and where they disagree. */
import { type CensusEntry, census } from '../constants/census.ts';
import { hasStop } from '../model/finding.ts';
import type { FileInterface } from '../model/interface.ts';
import { printable } from '../model/printable.ts';
import { languageOf, readSource } from '../readers/read-source.ts';
import { findingsText } from '../report/finding-text.ts';
import { openTree } from '../sources/open-tree.edge.ts';
import type { SourceTree } from '../sources/tree.ts';
import { type Command, EXIT, type ExitStatus, UsageError } from './command.ts';
import { promotedIn, REAL_BYTES } from './promotion.ts';
import { textOptions } from './text-options.ts';

export const command: Command = {
  name: 'constants',
  answers: 'which physical constants, of which edition, where they disagree',
  usage: 'mortise constants [PATH…] [--at REV]',
  options: {
    'real-bytes': REAL_BYTES,
  },
  help: [
    'Reads every source file under the paths (all of the code when none is named) and lists physical constants with the CODATA edition or IAU',
    'resolution whose digits they carry; then what is doubtful: disagreements, mixed editions, slips, single precision given to doubles, integer division.',
    '',
    '  mortise constants src --at v2.1',
  ].join('\n'),
  async run(invocation, surroundings): Promise<ExitStatus> {
    const { at, json } = invocation.options;
    const tree = await openTree(surroundings.cwd, typeof at === 'string' ? at : undefined);
    const { files, unread } = await readAll(tree, invocation.words, surroundings.signal);
    if (surroundings.signal.aborted) return EXIT.interrupted;
    if (files.size === 0 && invocation.words.length > 0)
      throw new UsageError(`no source file lies under ${invocation.words.map(printable).join(', ')}`);
    const { promote, says } = await promotedIn(tree, invocation, surroundings);
    const result = census(files, {
      promote,
      ...(tree.revision === null ? {} : { revision: tree.revision }),
    });
    if (json === true) {
      const { constants, findings } = result;
      surroundings.out(
        `${JSON.stringify({ revision: tree.revision, files: files.size, unread, promote, constants, findings })}\n`,
      );
    } else {
      if (says !== '') surroundings.out(`${says}\n\n`);
      surroundings.out(table(result.constants));
      surroundings.out(findingsText(result.findings, textOptions(invocation, surroundings)));
      if (unread.length > 0)
        surroundings.out(
          `Not read: ${unread.slice(0, 10).map(printable).join(', ')}${unread.length > 10 ? `, and ${unread.length - 10} more` : ''}\n`,
        );
    }
    return hasStop(result.findings) ? EXIT.stop : EXIT.ok;
  },
};

async function readAll(tree: SourceTree, words: readonly string[], signal: AbortSignal) {
  const wanted = words.map((word) => word.replace(/^\.\//, '').replace(/\/+$/, ''));
  const files = new Map<string, FileInterface>();
  const unread: string[] = [];
  for (const { path, kind } of await tree.entries()) {
    if (signal.aborted) break;
    if (kind !== 'file') continue;
    if (wanted.length > 0 && !wanted.some((word) => word === '.' || path === word || path.startsWith(`${word}/`)))
      continue;
    const language = languageOf(path);
    if (language === null || language === 'table') continue;
    const content = await tree.read(path);
    if (content === null) unread.push(path);
    else {
      const read = await readSource(path, content);
      files.set(path, read);
      if (read.incomplete.length > 0 && read.constants.length + read.procedures.length === 0) unread.push(path);
    }
  }
  return { files, unread };
}

function table(constants: readonly CensusEntry[]): string {
  const lines = constants.map(({ place, symbol, text, unit, name, editions, agreement, digitsLost }) => {
    const dated =
      editions.length === 0
        ? 'digits of no edition'
        : /^\d{4}/.test(editions[0]!)
          ? `CODATA ${editions.join(', ')}`
          : editions.join(', ');
    const lost = agreement === 'printed' || digitsLost === 0 ? '' : `, ${digitsLost} digits lost`;
    return `${printable(place.file)}:${place.line}  ${symbol} = ${printable(text)} ${unit}${name === null ? '' : ` (${printable(name)})`}  ${dated}${lost}\n`;
  });
  return lines.length === 0 ? 'No physical constant found.\n' : `${lines.join('')}\n`;
}

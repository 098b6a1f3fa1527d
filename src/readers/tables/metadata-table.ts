/**
 * Metadata tables beside procedures: a section a procedure, a block an argument, `key = value` lines. Bytes come in, claims go out.
 * @source the layout of `.meta` files of the Common Community Physics Package, CCPP Technical Documentation, "Metadata Table Rules"
 */
import { type Claim, emptyInterface, type FileInterface, type Incomplete } from '../../model/interface.ts';

const SECTION = /^\s*\[\s*([\w-]+)\s*\]\s*(?:[#;].*)?$/;
const PAIR = /([A-Za-z_]\w*)\s*=\s*([^|]*)/g;

export function isMetadataTable(head: string): boolean {
  return /^\s*\[\s*ccpp-(?:table-properties|arg-table)\s*\]/m.test(head);
}

/** What it says of units and shapes, each with the procedure that the section is for. Never throws. */
export function readMetadataTable(text: string): FileInterface {
  const claims: Claim[] = [];
  const incomplete: Incomplete[] = [];
  let table = '';
  let procedure: string | null = null;
  let argument: string | null = null;
  const lines = text.split('\n');
  for (let index = 0; index < lines.length; index++) {
    const line = lines[index]!.replace(/\r$/, '');
    const section = SECTION.exec(line);
    if (section !== null) {
      const name = section[1]!;
      if (name.startsWith('ccpp-')) {
        table = name;
        argument = null;
        if (name === 'ccpp-arg-table') procedure = null;
      } else argument = name.toLowerCase();
      continue;
    }
    if (/^\s*(?:[#;!].*)?$/.test(line)) continue;
    let found = false;
    for (const match of line.matchAll(PAIR)) {
      found = true;
      const [key, value] = [match[1]!.toLowerCase(), match[2]!.trim()];
      if (argument === null) {
        if (key === 'name' && table === 'ccpp-arg-table') procedure = value.toLowerCase();
        continue;
      }
      const what = key === 'units' ? 'unit' : key === 'dimensions' ? 'shape' : null;
      if (what === null || value === '' || (what === 'shape' && value === '()')) continue;
      claims.push({
        name: argument,
        parent: procedure,
        what,
        value,
        text: match[0].trim().slice(0, 200),
        from: 'metadata',
        line: index + 1,
        column: match.index + 1,
      });
    }
    // A multi-line list of dependencies is the one thing that has no key.
    if (!found && argument !== null)
      incomplete.push({ line: index + 1, why: `"${line.trim().slice(0, 40)}" is neither a section nor key = value` });
  }
  return { ...emptyInterface('table'), claims, incomplete: incomplete.slice(0, 20) };
}

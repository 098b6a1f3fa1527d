/** What the changed files show without being read as code: links, submodules, settings of git, characters that hide. Pure. */
import type { NetFile } from '../history/net-change.ts';
import type { Finding } from '../model/finding.ts';
import { decodeText } from '../sources/git-object.ts';
import { staysInside } from '../sources/git-path.ts';

/** Controls but tab, line ends and form feed; marks that reorder text; characters without width. */
const HIDING = /[\u0000-\u0008\u000b\u000e-\u001f\u007f-\u009f\u200b-\u200f\u202a-\u202e\u2060-\u2069\ufeff]/;

/** @param bytesOf  content of a blob; null where it is missing */
export async function lookAtFiles(
  files: readonly NetFile[],
  head: string,
  bytesOf: (id: string) => Promise<Uint8Array | null>,
): Promise<Finding[]> {
  const findings: Finding[] = [];
  for (const { path, before, after } of files) {
    if (after === null) continue;
    const place = { file: path, line: 1, column: 1, revision: head };
    if (after.mode === '120000') {
      const target = decodeText((await bytesOf(after.id)) ?? new Uint8Array());
      if (!linkStays(path, target))
        findings.push({
          kind: 'link-leaves',
          gravity: 'caution',
          place,
          says: `This link leads outside the repository, to "${target}".`,
          evidence: [],
          next: 'put the file itself into the repository, or declare it as an input; nothing here follows the link.',
        });
    } else if (after.mode === '160000') {
      findings.push({
        kind: 'submodule-moved',
        gravity: 'caution',
        place,
        says: `${before === null ? 'A submodule joins' : 'The submodule moves'} at commit ${after.id.slice(0, 10)}; what it brings was not looked at.`,
        evidence: before === null ? [] : [{ says: `before: ${before.id.slice(0, 10)}` }],
        next: 'review the submodule in its own repository.',
      });
    } else if (after.id !== before?.id) {
      const bytes = await bytesOf(after.id);
      const finding = bytes === null ? null : hiddenIn(bytes, before === null ? null : await bytesOf(before.id), place);
      if (finding !== null) findings.push(finding);
    }
  }
  return findings;
}

/** True when a link, taken from the folder it stands in, ends below the root. */
function linkStays(path: string, target: string): boolean {
  if (target.startsWith('/')) return false;
  const parts = path.split('/').slice(0, -1);
  for (const part of target.split('/')) {
    if (part === '..') {
      if (parts.pop() === undefined) return false;
    } else if (part !== '.' && part !== '') parts.push(part);
  }
  return parts.length === 0 || staysInside(parts.join('/'));
}

/** A line that the base does not have, with characters that show otherwise than they are. Binary files are no text. */
function hiddenIn(bytes: Uint8Array, before: Uint8Array | null, place: Finding['place']): Finding | null {
  if (bytes.subarray(0, 8000).includes(0)) return null;
  const text = decodeText(bytes);
  if (!HIDING.test(text)) return null;
  const known = new Set(before === null ? [] : decodeText(before).split('\n'));
  const lines = text.split('\n');
  const meant = lines.flatMap((line, index) => {
    // A byte order mark may begin a file.
    const at = (index === 0 ? line.replace(/^\ufeff/, ' ') : line).search(HIDING);
    return at < 0 || known.has(line) ? [] : [{ line: index + 1, column: at + 1, text: line.replace(/\r$/, '') }];
  });
  const [first] = meant;
  if (first === undefined) return null;
  const code = first.text
    .codePointAt(first.column - 1)!
    .toString(16)
    .toUpperCase()
    .padStart(4, '0');
  return {
    kind: 'text-hides',
    gravity: 'caution',
    place: { ...place, line: first.line, column: first.column },
    says: `${meant.length === 1 ? 'A new line holds' : `${meant.length} new lines hold`} characters that a screen does not show as they are; the first is U+${code}.`,
    evidence: [{ says: 'the line meant', excerpt: { ...first, width: 1 } }],
    next: 'take them out, or see that each is meant: what a reader sees is not what the compiler reads.',
  };
}

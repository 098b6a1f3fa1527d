/** Prototypes and interface bodies held against the definitions they stand for. Pure. */
import { type Finding, sortFindings } from '../../model/finding.ts';
import type { LinkedCode } from '../link.ts';
import type { Provider } from '../resolver.ts';

export function checkPrototypes(linked: LinkedCode): Finding[] {
  const findings: Finding[] = [];
  for (const [name, prototypes] of linked.prototypes) {
    const definitions = linked.providers.get(name) ?? [];
    // Several definitions are alternatives of the build; a method of that name is someone else.
    if (definitions.length !== 1 || definitions[0]!.procedure.kind === 'method') continue;
    const [definition] = definitions;
    for (const prototype of prototypes) {
      const [from, to] = [linked.files.get(prototype.file)!.language, linked.files.get(definition!.file)!.language];
      if (from !== to && !(from === 'fortran' && to === 'c')) continue;
      const says = difference(prototype, definition!, from === to);
      if (says === null) continue;
      findings.push({
        kind: 'prototype-differs',
        gravity: 'caution',
        place: { file: prototype.file, line: prototype.procedure.line, column: prototype.procedure.column },
        says: `What is declared here of ${name} is not what is defined: ${says}.`,
        evidence: [
          {
            says: `defined as ${name}(${definition!.procedure.args.map((one) => one.name).join(', ')})`,
            place: { file: definition!.file, line: definition!.procedure.line, column: definition!.procedure.column },
          },
        ],
        next: 'bring the two to one signature; better, let one be made from the other.',
      });
    }
  }
  return sortFindings(findings);
}

function difference(prototype: Provider, definition: Provider, sameLanguage: boolean): string | null {
  const [a, b] = [prototype.procedure.args, definition.procedure.args];
  if (a.length !== b.length) {
    // Fortran passes the length of each character argument behind the others.
    const hidden = sameLanguage ? 0 : a.filter((one) => one.type === 'character').length;
    return b.length === a.length + hidden ? null : `${a.length} arguments against ${b.length}`;
  }
  if (!sameLanguage) return null;
  for (const [index, one] of a.entries()) {
    const other = b[index]!;
    if (
      one.type !== other.type &&
      one.type !== 'unknown' &&
      other.type !== 'unknown' &&
      !/[()]/.test(one.type + other.type)
    )
      return `argument ${index + 1} is ${one.type} against ${other.type}`;
    if (one.bytes !== null && other.bytes !== null && one.bytes !== other.bytes)
      return `argument ${index + 1} has ${one.bytes} bytes against ${other.bytes}`;
  }
  return null;
}

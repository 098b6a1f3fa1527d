/** Everything that callers, COMMON blocks and prototypes of one code have to say to each other. Pure. */
import { type Finding, sortFindings } from '../../model/finding.ts';
import type { FileInterface } from '../../model/interface.ts';
import { type LinkOptions, linkInterfaces } from '../link.ts';
import { checkCallers } from './check-callers.ts';
import { checkCallClaims } from './check-claims.ts';
import { checkCommons } from './check-commons.ts';
import { checkPrototypes } from './check-prototypes.ts';
import { checkResults } from './check-results.ts';

export function checkCode(files: ReadonlyMap<string, FileInterface>, options: LinkOptions = {}): Finding[] {
  const linked = linkInterfaces(files, options);
  return sortFindings([
    ...checkCallers(linked),
    ...checkCommons(linked),
    ...checkPrototypes(linked),
    ...checkCallClaims(linked),
    ...checkResults(linked),
  ]);
}

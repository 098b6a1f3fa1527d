/** Pages on what readers and callers find. */
import type { ReaderKind } from '../../model/finding-kind.ts';
import type { Explanation } from './explanation.ts';

export const readersExplanations = {
  'source-incomplete': {
    means: 'Part of a source file could not be read, so what it declares or calls is not known.',
    arises: 'A statement of a dialect that no standard has, a template, a macro that makes code, or a damaged file.',
    mend: 'Look at the line. Where a build option decides, name it under "define" in the assembly.',
    accept: 'When the part that was not read is no part of any interface.',
    example: 'A macro that writes whole procedures stands where a declaration should.',
  },
} satisfies Record<ReaderKind, Explanation>;

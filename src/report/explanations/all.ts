/** Every kind of finding with its page. The compiler sees that none is missing. */
import type { FindingKind } from '../../model/finding-kind.ts';
import { auditExplanations } from './audit.ts';
import { constantsExplanations } from './constants.ts';
import type { Explanation } from './explanation.ts';
import { fitExplanations } from './fit.ts';
import { historyExplanations } from './history.ts';
import { manifestsExplanations } from './manifests.ts';
import { readersExplanations } from './readers.ts';
import { registerExplanations } from './register.ts';
import { reviewExplanations } from './review.ts';
import { runsExplanations } from './runs.ts';
import { unitsExplanations } from './units.ts';

export const explanations: Readonly<Record<FindingKind, Explanation>> = {
  ...unitsExplanations,
  ...manifestsExplanations,
  ...readersExplanations,
  ...constantsExplanations,
  ...fitExplanations,
  ...historyExplanations,
  ...runsExplanations,
  ...registerExplanations,
  ...auditExplanations,
  ...reviewExplanations,
};

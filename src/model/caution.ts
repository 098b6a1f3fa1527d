/** What stands in every report and clearance of a safety-related assembly. */
export const SAFETY_CAUTION =
  'Mortise compares and records; it certifies nothing. A cleared audit is not a safety case: the responsible authority, local codes and licensed practice decide.';

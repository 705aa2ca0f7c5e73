/** What every report tells its reader about the limits of the model. */
export const CAUTION =
  'The model is third order, a truncated series, and a preview is no substitute for a measured sample where a decision can hurt ' +
  'someone: safety functions follow their own standards and need licensed practice.';

/** Stands on every export, as on every finding and share page. */
export const CAUTION =
  'A one-and-a-half-layer experiment is an idealisation. It is not a forecast, and not to be used for navigation, ' +
  'safety at sea, fisheries limits, or engineering design; for those, use the services of the responsible national ' +
  'agency and qualified people.';

/**
 * What reporting recommendations ask for and a workspace cannot hold: the user says it in words, under these keys.
 */
export const STATEMENT_FIELDS = [
  { field: 'amplifier', name: 'Amplifier and its filters' },
  { field: 'acquisition-software', name: 'Hardware and software of the recording' },
  { field: 'reference', name: 'Reference' },
  { field: 'earlier-filters', name: 'Filters before this analysis' },
  { field: 'earlier-edges', name: 'Handling of the ends by earlier filters' },
  { field: 'resampling', name: 'Resampling and its anti-alias filter' },
  { field: 'detrending', name: 'Detrending' },
  { field: 'artifacts', name: 'Artifact handling' },
  { field: 'processing-order', name: 'Order of the other processing steps' },
  { field: 'coefficients', name: 'Filter coefficients' },
  { field: 'response-figure', name: 'Figure of the impulse or step response' },
] as const

export type StatementField = (typeof STATEMENT_FIELDS)[number]['field']

/** Life cycle of a method version and its runs. */
export const METHOD_VERSION_STATUSES = [
  'draft',
  'in_review',
  'effective',
  'superseded',
  'withdrawn'
] as const;
export type MethodVersionStatus = (typeof METHOD_VERSION_STATUSES)[number];

export const METHOD_VERSION_STATUS_NAMES: Readonly<Record<MethodVersionStatus, string>> = {
  draft: 'Draft',
  in_review: 'In review',
  effective: 'Effective',
  superseded: 'Superseded',
  withdrawn: 'Withdrawn'
};

export const RUN_KINDS = ['validation', 'impact'] as const;
export const RUN_STATUSES = ['waiting', 'running', 'finished', 'stopped', 'failed'] as const;

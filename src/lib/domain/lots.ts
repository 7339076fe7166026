/** States of a lot: every lot starts in quarantine, and only a signed disposition releases or rejects it. */
export const LOT_STATUSES = ['quarantine', 'under_review', 'held', 'released', 'rejected'] as const;
export type LotStatus = (typeof LOT_STATUSES)[number];

export const LOT_STATUS_NAMES: Readonly<Record<LotStatus, string>> = {
  quarantine: 'Quarantine',
  under_review: 'Under review',
  held: 'Held',
  released: 'Released',
  rejected: 'Rejected'
};

export const SAMPLING_PLANS = ['every_container', 'sqrt_n_plus_1', 'who_n', 'who_p', 'who_r'] as const;
export const PAPER_KINDS = [
  'certificate_of_analysis',
  'delivery_paper',
  'photograph',
  'limit_test_report'
] as const;
export const LIMIT_TEST_OUTCOMES = ['complies', 'does_not_comply'] as const;
export const DISPOSITION_OUTCOMES = ['release', 'reject', 'reopen'] as const;
export type DispositionOutcome = (typeof DISPOSITION_OUTCOMES)[number];

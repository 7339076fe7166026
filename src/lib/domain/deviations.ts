export const DEVIATION_ORIGINS = [
  'fail',
  'inconclusive',
  'withdrawn_method',
  'lapsed_check',
  'by_hand'
] as const;
export const DEVIATION_PHASES = ['assess', 'investigate', 'conclude', 'closed'] as const;
export type DeviationPhase = (typeof DEVIATION_PHASES)[number];

export const DEVIATION_PHASE_NAMES: Readonly<Record<DeviationPhase, string>> = {
  assess: 'Open',
  investigate: 'In investigation',
  conclude: 'Awaiting decision',
  closed: 'Closed'
};

export const CAUSE_CATEGORIES = [
  'wrong_material',
  'labelling',
  'packaging',
  'measurement',
  'instrument',
  'method',
  'operator',
  'supplier_change',
  'none_found'
] as const;
export type CauseCategory = (typeof CAUSE_CATEGORIES)[number];

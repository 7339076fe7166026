/** Vocabulary of materials and their references. */
export const MATERIAL_STATUSES = ['active', 'retired'] as const;
export const RAMAN_SUITABILITIES = ['suitable', 'no_first_order_spectrum', 'not_suitable'] as const;
export type RamanSuitability = (typeof RAMAN_SUITABILITIES)[number];
export const REFERENCE_KINDS = ['reference_standard', 'lot_sample'] as const;
export type ReferenceKind = (typeof REFERENCE_KINDS)[number];
export const REFERENCE_STATUSES = ['draft', 'accepted', 'rejected', 'withdrawn'] as const;
export type ReferenceStatus = (typeof REFERENCE_STATUSES)[number];

export const REFERENCE_STATUS_NAMES: Readonly<Record<ReferenceStatus, string>> = {
  draft: 'Draft',
  accepted: 'Accepted',
  rejected: 'Rejected',
  withdrawn: 'Withdrawn'
};

/**
 * Check digit of a CAS Registry Number: the last digit is the sum of the others, each times its place
 * counted from the right, modulo 10 (worked example 50-78-2: 8*1 + 7*2 + 0*3 + 5*4 = 42, digit 2).
 */
export function isCasNumber(text: string): boolean {
  const match = /^(\d{2,7})-(\d{2})-(\d)$/.exec(text);
  if (!match) return false;
  const digits = match[1] + match[2];
  let sum = 0;
  for (let place = 1; place <= digits.length; place++) sum += place * Number(digits[digits.length - place]);
  return sum % 10 === Number(match[3]);
}

/** One sentence on why a material cannot have a Raman identity method, or null when it can. */
export function whyNoMethod(material: {
  ramanSuitability: RamanSuitability;
  suitabilityReason: string | null;
}): string | null {
  if (material.ramanSuitability === 'suitable') return null;
  const reason = material.suitabilityReason ?? 'It has no Raman spectrum that identifies it.';
  return `${reason} Use another identity test.`;
}

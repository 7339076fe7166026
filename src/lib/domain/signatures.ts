/** What a signature can mean; each signing step allows only its own (21 CFR 11.50(a)(3)). */
export const SIGNATURE_MEANINGS = [
  'authored',
  'reviewed',
  'approved',
  'rejected',
  'granted',
  'declined',
  'acknowledged'
] as const;
export type SignatureMeaning = (typeof SIGNATURE_MEANINGS)[number];

export const SIGNATURE_MEANING_NAMES: Readonly<Record<SignatureMeaning, string>> = {
  authored: 'I wrote this and stand by it',
  reviewed: 'I reviewed this',
  approved: 'I approve this',
  rejected: 'I reject this',
  granted: 'I grant this',
  declined: 'I decline this',
  acknowledged: 'I have read and acknowledge this'
};

/** What a person accepts before their first signature (21 CFR 11.10(j)); the trail keeps it as it was accepted. */
export const ACCOUNTABILITY_STATEMENT =
  'My electronic signature in this system binds me as my handwritten one does. I sign only what I have seen, nobody else uses my password, and I answer for what is done under my name.';

/** States of an instrument and kinds of logbook entry. */
export const INSTRUMENT_STATUSES = ['in_service', 'out_of_service'] as const;
export const LOGBOOK_KINDS = [
  'use',
  'check',
  'service',
  'cleaning',
  'move',
  'fault',
  'out_of_service',
  'return_to_service'
] as const;

/** Whether an instrument may be used now, from its last performance check. */
export type CheckState = 'valid' | 'missing' | 'expired' | 'failed';

export interface LastCheck {
  readonly passed: boolean;
  readonly validUntil: Date | null;
}

/** State of an instrument's fitness at `now`: the last check decides, whatever came before it. */
export function checkState(last: LastCheck | null, now: Date): CheckState {
  if (!last) return 'missing';
  if (!last.passed) return 'failed';
  return last.validUntil !== null && last.validUntil > now ? 'valid' : 'expired';
}

export const CHECK_STATE_NAMES: Readonly<Record<CheckState, string>> = {
  valid: 'Ready',
  missing: 'Blocked: no check yet',
  expired: 'Check due',
  failed: 'Blocked: last check failed'
};

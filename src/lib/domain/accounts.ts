/** States of an account; accounts are never deleted. */
export const ACCOUNT_STATUSES = ['active', 'locked', 'suspended', 'left'] as const;
export type AccountStatus = (typeof ACCOUNT_STATUSES)[number];

export const ACCOUNT_STATUS_NAMES: Readonly<Record<AccountStatus, string>> = {
  active: 'Active',
  locked: 'Locked',
  suspended: 'Suspended',
  left: 'Left'
};

/** Sessions end after this long without a request, and in any case after the absolute life. */
export const SESSION_IDLE_MINUTES = 15;
export const SESSION_ABSOLUTE_HOURS = 12;
/** Wrong passwords in a row before the account waits, and for how long. */
export const SIGN_IN_ATTEMPTS = 5;
export const LOCK_MINUTES = 15;
/** Wrong passwords at a signature before the session ends. */
export const SIGNATURE_ATTEMPTS = 3;
/** Shortest and longest password (NIST SP 800-63B-4: at least 15 where it stands alone). */
export const PASSWORD_MIN_LENGTH = 15;
export const PASSWORD_MAX_LENGTH = 200;
/** How long a link to set a password is good. */
export const PASSWORD_LINK_MINUTES = 15;

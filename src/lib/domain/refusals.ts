/**
 * A refusal is a value: something a person asked for that the rules do not allow (permission, state, a bad
 * file). One table maps its code to an HTTP status, a title and what to do next; the detail says what happened.
 */
export const REFUSALS = {
  'not-signed-in': { status: 401, title: 'You are not signed in', next: 'Sign in and try again.' },
  'not-allowed': {
    status: 403,
    title: 'Your role does not open this',
    next: 'Ask a person who holds the role, or an administrator.'
  },
  'own-work': {
    status: 403,
    title: 'Another person must do this',
    next: 'Ask a second person who did not do the work.'
  },
  'signature-wrong': { status: 401, title: 'The password is not right', next: 'Type your password again.' },
  'not-found': {
    status: 404,
    title: 'There is no such record',
    next: 'Check the number or scan the label again.'
  },
  'wrong-state': {
    status: 409,
    title: 'This cannot be done now',
    next: 'Look at the record again: someone may have changed it.'
  },
  'changed-meanwhile': {
    status: 409,
    title: 'The record has changed since you opened it',
    next: 'Open it again and repeat what you did.'
  },
  'already-exists': { status: 409, title: 'This is already on record', next: 'Open the existing record.' },
  'key-reused': {
    status: 409,
    title: 'The same key came with other content',
    next: 'Send the new content under a new key.'
  },
  'link-spent': {
    status: 410,
    title: 'This link is no longer good',
    next: 'Ask an administrator for a new link. It is good once, for 15 minutes.'
  },
  'bad-input': {
    status: 422,
    title: 'Something in the form needs attention',
    next: 'Correct the fields named and send it again.'
  },
  'bad-file': {
    status: 422,
    title: 'The file could not be read',
    next: 'Export the spectrum again as JCAMP-DX or delimited text.'
  },
  'too-large': { status: 413, title: 'The file is too large', next: 'Send a file smaller than the limit.' },
  'too-many': { status: 429, title: 'Too many attempts', next: 'Wait a little and try again.' }
} as const;

export type RefusalCode = keyof typeof REFUSALS;

export interface Refusal {
  readonly ok: false;
  readonly code: RefusalCode;
  /** What happened, in plain words. */
  readonly detail: string;
  /** Field to sentence, where the refusal is about a form. */
  readonly fields?: Readonly<Record<string, string>>;
}

export interface Done<T> {
  readonly ok: true;
  readonly value: T;
}

/** What every command returns. */
export type Outcome<T> = Done<T> | Refusal;

export const done = <T>(value: T): Done<T> => ({ ok: true, value });

export const refuse = (code: RefusalCode, detail: string, fields?: Record<string, string>): Refusal => ({
  ok: false,
  code,
  detail,
  ...(fields ? { fields } : {})
});

/** A refusal as a problem document (RFC 9457). */
export interface Problem {
  readonly type: string;
  readonly title: string;
  readonly status: number;
  readonly detail: string;
  readonly next: string;
  readonly fields?: Readonly<Record<string, string>>;
}

export function problemOf(refusal: Refusal): Problem {
  const { status, title, next } = REFUSALS[refusal.code];
  return {
    type: `urn:wharfinger:problem:${refusal.code}`,
    title,
    status,
    detail: refusal.detail,
    next,
    ...(refusal.fields ? { fields: refusal.fields } : {})
  };
}

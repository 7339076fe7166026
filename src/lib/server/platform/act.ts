import type { Actor } from '../../domain/roles';

/** The person, or the service, that acts. */
export interface ActingPerson extends Actor {
  readonly userName: string;
  readonly siteId: string;
  /** IANA zone of the person's site. */
  readonly timeZone: string;
  readonly demo: boolean;
}

/** Who acts, in which request and session: handed to every command, and copied into the trail. */
export interface Act {
  readonly actor: ActingPerson;
  readonly requestId: string;
  /** SHA-256 of the session's token; null for a service and for an instrument's own token. */
  readonly sessionKey: string | null;
}

/** Stands for "no account": a service acts, and its name says which. */
export const NO_ACCOUNT = '00000000-0000-0000-0000-000000000000';

/** An act of the product itself. The name must say which service and which version. */
export function systemAct(service: string, siteId: string = NO_ACCOUNT, timeZone = 'UTC'): Act {
  return {
    actor: { id: NO_ACCOUNT, printedName: service, userName: '', roles: [], siteId, timeZone, demo: false },
    requestId: '',
    sessionKey: null
  };
}

/** The acting account's id, or null where the product itself acts. */
export const accountId = (act: Act): string | null => (act.actor.id === NO_ACCOUNT ? null : act.actor.id);

import { createHash, randomBytes } from 'node:crypto';
import { and, eq, isNull, sql } from 'drizzle-orm';
import { SESSION_ABSOLUTE_HOURS, SESSION_IDLE_MINUTES } from '../../domain/accounts';
import type { RoleId } from '../../domain/roles';
import type { Executor } from '../db/client';
import { sessions } from '../db/schema';
import type { ActingPerson } from './act';

/** What the cookie holds: 256 random bits, kept nowhere else. The table knows only its SHA-256. */
export const newToken = () => randomBytes(32).toString('base64url');
export const tokenKey = (token: string) => createHash('sha256').update(token).digest('hex');

/** Opens a session under a new token (never one that the browser brought) and returns the token. */
export async function openSession(
  tx: Executor,
  userId: string,
  from: { address?: string; userAgent?: string }
): Promise<string> {
  const token = newToken();
  await tx.insert(sessions).values({
    tokenHash: tokenKey(token),
    userId,
    expiresAt: sql`clock_timestamp() + make_interval(hours => ${SESSION_ABSOLUTE_HOURS})`,
    address: from.address?.slice(0, 100),
    userAgent: from.userAgent?.slice(0, 300)
  });
  return token;
}

export interface LiveSession {
  readonly sessionKey: string;
  readonly person: ActingPerson;
}

/** A person as the queries by token return them. */
export type PersonRow = {
  id: string;
  printed_name: string;
  user_name: string;
  site_id: string;
  time_zone: string;
  demo: boolean;
  roles: RoleId[] | null;
};

/**
 * The person of a live session, and the session's idle time begins anew; null where it has ended, was idle too
 * long, or its account is no longer active. One statement, by the database's clock, read at every request:
 * whatever was taken away (account, role, session) is gone at the next one.
 */
export async function touchSession(db: Executor, token: string): Promise<LiveSession | null> {
  const sessionKey = tokenKey(token);
  const [row] = await db.execute<PersonRow>(sql`
    update sessions s set last_seen_at = clock_timestamp()
    from users u join sites si on si.id = u.site_id
    where s.token_hash = ${sessionKey}
      and u.id = s.user_id
      and u.status = 'active'
      and s.revoked_at is null
      and s.expires_at > clock_timestamp()
      and s.last_seen_at > clock_timestamp() - make_interval(mins => ${SESSION_IDLE_MINUTES})
    returning u.id, u.printed_name, u.user_name, u.site_id, si.time_zone, si.demo,
      (select array_agg(g.role order by g.role) from role_grants g where g.user_id = u.id and g.ended_at is null) as roles`);
  if (!row) return null;
  return { sessionKey, person: personOf(row) };
}

export const personOf = (row: PersonRow): ActingPerson => ({
  id: row.id,
  printedName: row.printed_name,
  userName: row.user_name,
  roles: row.roles ?? [],
  siteId: row.site_id,
  timeZone: row.time_zone,
  demo: row.demo
});

/** Ends a session for good; false where it had ended already. */
export async function endSession(tx: Executor, sessionKey: string, why: string): Promise<boolean> {
  const ended = await tx
    .update(sessions)
    .set({ revokedAt: sql`clock_timestamp()`, revokedWhy: why })
    .where(and(eq(sessions.tokenHash, sessionKey), isNull(sessions.revokedAt)))
    .returning({ key: sessions.tokenHash });
  return ended.length === 1;
}

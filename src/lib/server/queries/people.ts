import { and, asc, desc, eq, isNull, sql } from 'drizzle-orm';
import { SESSION_IDLE_MINUTES } from '../../domain/accounts';
import type { RoleId } from '../../domain/roles';
import type { Executor } from '../db/client';
import { outboxMails, roleGrants, sessions, sites, users } from '../db/schema';

export async function getSite(db: Executor, id: string) {
  const [row] = await db.select().from(sites).where(eq(sites.id, id));
  return row ?? null;
}

/** Qualified by hand: in a query of one table the builder writes bare column names, which a subquery would take as its own. */
const ownId = sql.raw('"users"."id"');

/** Accounts of the site, or one of them, with their open roles and live sessions. */
export async function listPeople(db: Executor, siteId: string, userId?: string) {
  return db
    .select({
      id: users.id,
      userName: users.userName,
      printedName: users.printedName,
      email: users.email,
      status: users.status,
      proofedAt: users.proofedAt,
      roles: sql<
        RoleId[]
      >`coalesce((select array_agg(g.role order by g.role) from ${roleGrants} g where g.user_id = ${ownId} and g.ended_at is null), '{}')`,
      sessions: sql<number>`(select count(*)::int from ${sessions} s where s.user_id = ${ownId} and s.revoked_at is null and s.expires_at > clock_timestamp() and s.last_seen_at > clock_timestamp() - make_interval(mins => ${SESSION_IDLE_MINUTES}))`,
      lastSeenAt:
        sql<Date | null>`(select max(s.last_seen_at) from ${sessions} s where s.user_id = ${ownId})`.mapWith(
          (value: string | null) => (value === null ? null : new Date(value))
        )
    })
    .from(users)
    .where(and(eq(users.siteId, siteId), userId === undefined ? undefined : eq(users.id, userId)))
    .orderBy(asc(users.userName));
}

/** Mail that was sent, waits or failed, newest first. */
export async function listMails(db: Executor, limit = 100) {
  return db.select().from(outboxMails).orderBy(desc(outboxMails.createdAt)).limit(limit);
}

/** A person's sessions that still open the door: neither ended, nor idle too long, nor too old. */
export async function listSessions(db: Executor, userId: string) {
  return db
    .select()
    .from(sessions)
    .where(
      and(
        eq(sessions.userId, userId),
        isNull(sessions.revokedAt),
        sql`${sessions.expiresAt} > clock_timestamp()`,
        sql`${sessions.lastSeenAt} > clock_timestamp() - make_interval(mins => ${SESSION_IDLE_MINUTES})`
      )
    )
    .orderBy(desc(sessions.lastSeenAt));
}

/** One account of the site with the roles it holds, or null. */
export async function getPerson(db: Executor, siteId: string, userId: string) {
  const [person] = await listPeople(db, siteId, userId);
  if (!person) return null;
  const [more] = await db
    .select({
      personId: users.personId,
      proofedBy: users.proofedBy,
      statementAcceptedAt: users.statementAcceptedAt,
      hasPassword: sql<boolean>`${users.passwordHash} is not null`,
      createdAt: users.createdAt
    })
    .from(users)
    .where(eq(users.id, userId));
  return { ...person, ...more };
}

import { and, eq, isNull, or, sql } from 'drizzle-orm';
import type { NewAccount } from '../../domain/newAccount';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import type { Database, Transaction } from '../db/client';
import { sessions, users } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { issuePasswordLink } from '../platform/passwordLinks';
import { recordTrail } from '../platform/trail';
import { siteToday } from '../queries/clock';

/**
 * Makes an account for one named person whose identity somebody saw, without a password and without a role, and the
 * link with which that person sets the password. Nobody's number or user name is ever used twice.
 */
export async function createAccount(
  db: Database,
  act: Act,
  input: NewAccount
): Promise<Outcome<{ id: string; token: string }>> {
  if (!can(act.actor, 'admin.people')) return refuse('not-allowed', 'Making accounts is for administrators.');
  const { siteId, timeZone } = act.actor;
  return transact(db, async (tx) => {
    const taken = await takenFields(tx, input);
    if (Object.keys(taken).length > 0)
      return refuse('already-exists', 'No account was made: a person has one account, for good.', taken);
    if (input.proofedOn > (await siteToday(tx, timeZone)))
      return refuse('bad-input', 'No account was made.', { proofedOn: 'This day is still to come' });
    const { proofedOn, ...columns } = input;
    const [row] = await tx
      .insert(users)
      .values({
        ...columns,
        siteId,
        proofedAt: sql`${proofedOn}::date::timestamp at time zone ${timeZone}`
      })
      .onConflictDoNothing()
      .returning({ id: users.id });
    if (!row)
      return refuse(
        'already-exists',
        'Somebody made an account with this name or number at the same moment.'
      );
    await recordTrail(tx, act, {
      action: 'account.create',
      recordType: 'account',
      recordId: row.id,
      recordLabel: `Account ${input.userName}`,
      after: { ...input }
    });
    const token = await issuePasswordLink(tx, row.id, act.actor.id);
    return done({ id: row.id, token });
  });
}

/** Number and user name are looked for among all accounts of the system, those of people who left too. */
async function takenFields(tx: Transaction, input: NewAccount): Promise<Record<string, string>> {
  const rows = await tx
    .select({ userName: users.userName, personId: users.personId })
    .from(users)
    .where(or(sql`lower(${users.userName}) = lower(${input.userName})`, eq(users.personId, input.personId)));
  const fields: Record<string, string> = {};
  if (rows.some((row) => row.userName.toLowerCase() === input.userName.toLowerCase()))
    fields.userName = "This user name is or was another person's; choose another";
  const same = rows.find((row) => row.personId === input.personId);
  if (same) fields.personId = `The person of this number has the account ${same.userName}`;
  return fields;
}

/** Suspends an account or brings it back. A suspended account's sessions end at once; its records keep its name. */
export async function setAccountStatus(
  db: Database,
  act: Act,
  userId: string,
  status: 'active' | 'suspended' | 'left',
  reason: string
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'admin.people'))
    return refuse('not-allowed', 'Keeping accounts is for administrators.');
  if (reason.trim().length < 3)
    return refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' });
  if (userId === act.actor.id)
    return refuse('own-work', 'Another administrator must change your own account.');
  return transact(db, async (tx) => {
    const [row] = await tx
      .select()
      .from(users)
      .where(and(eq(users.id, userId), eq(users.siteId, act.actor.siteId)))
      .for('update');
    if (!row) return refuse('not-found', 'There is no such account.');
    if (row.status === 'left')
      return refuse('wrong-state', 'The person has left; their account is never used again.');
    await tx.update(users).set({ status, failedAttempts: 0, lockedUntil: null }).where(eq(users.id, userId));
    if (status !== 'active') {
      await tx
        .update(sessions)
        .set({ revokedAt: sql`clock_timestamp()`, revokedWhy: `account ${status}` })
        .where(and(eq(sessions.userId, userId), isNull(sessions.revokedAt)));
    }
    await recordTrail(tx, act, {
      action: 'account.status',
      recordType: 'account',
      recordId: userId,
      recordLabel: `Account ${row.userName}`,
      before: { status: row.status },
      after: { status },
      reason: reason.trim()
    });
    return done({ id: userId });
  });
}

/** Ends all sessions of a person. */
export async function endSessions(
  db: Database,
  act: Act,
  userId: string
): Promise<Outcome<{ count: number }>> {
  if (!can(act.actor, 'admin.people')) return refuse('not-allowed', 'Ending sessions is for administrators.');
  return transact(db, async (tx) => {
    const [row] = await tx
      .select()
      .from(users)
      .where(and(eq(users.id, userId), eq(users.siteId, act.actor.siteId)));
    if (!row) return refuse('not-found', 'There is no such account.');
    const ended = await tx
      .update(sessions)
      .set({ revokedAt: sql`clock_timestamp()`, revokedWhy: 'ended by an administrator' })
      .where(and(eq(sessions.userId, userId), isNull(sessions.revokedAt)))
      .returning({ key: sessions.tokenHash });
    await recordTrail(tx, act, {
      action: 'session.end',
      recordType: 'account',
      recordId: userId,
      recordLabel: `Account ${row.userName}`,
      after: { sessionsEnded: ended.length }
    });
    return done({ count: ended.length });
  });
}

/** Ends one of one's own sessions; says whether it was the one that acts. */
export async function endOwnSession(
  db: Database,
  act: Act,
  sessionKey: string
): Promise<Outcome<{ current: boolean }>> {
  if (!can(act.actor, 'account.own')) return refuse('not-allowed', 'Your account has no role yet.');
  return transact(db, async (tx) => {
    const ended = await tx
      .update(sessions)
      .set({ revokedAt: sql`clock_timestamp()`, revokedWhy: 'ended by its owner' })
      .where(
        and(eq(sessions.tokenHash, sessionKey), eq(sessions.userId, act.actor.id), isNull(sessions.revokedAt))
      )
      .returning({ key: sessions.tokenHash });
    if (ended.length === 0) return refuse('not-found', 'That session has ended already.');
    await recordTrail(tx, act, {
      action: 'session.end',
      recordType: 'account',
      recordId: act.actor.id,
      recordLabel: `Account ${act.actor.userName}`,
      after: { sessionsEnded: 1, own: true }
    });
    return done({ current: sessionKey === act.sessionKey });
  });
}

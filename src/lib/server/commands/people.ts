import { and, eq, isNull, sql } from 'drizzle-orm';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import type { Database } from '../db/client';
import { sessions, users } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { recordTrail } from '../platform/trail';

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

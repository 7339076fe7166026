import { and, eq, isNull, ne, sql } from 'drizzle-orm';
import { ACCOUNTABILITY_STATEMENT } from '../../domain/signatures';
import { passwordFault } from '../../domain/passwords';
import { done, refuse, type Outcome, type Refusal } from '../../domain/refusals';
import { can } from '../../domain/roles';
import type { Database, Transaction } from '../db/client';
import { passwordLinks, sessions, sites, users } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { hashPassword, verifyPassword } from '../platform/password';
import { issuePasswordLink, readPasswordLink } from '../platform/passwordLinks';
import { countInSession } from '../platform/signatureAttempt';
import { recordTrail } from '../platform/trail';

/** Makes a link with which an account's owner sets a new password; what was the password goes on counting until then. */
export async function makePasswordLink(
  db: Database,
  act: Act,
  userId: string
): Promise<Outcome<{ token: string; userName: string }>> {
  if (!can(act.actor, 'admin.people'))
    return refuse('not-allowed', 'Making links to set a password is for administrators.');
  if (userId === act.actor.id)
    return refuse('own-work', 'You change your own password on your account page, with the old one.');
  return transact(db, async (tx) => {
    const [account] = await tx
      .select()
      .from(users)
      .where(and(eq(users.id, userId), eq(users.siteId, act.actor.siteId)))
      .for('update');
    if (!account) return refuse('not-found', 'There is no such account.');
    if (account.status !== 'active')
      return refuse('wrong-state', 'The account is not active, so nobody sets a password for it.');
    const token = await issuePasswordLink(tx, userId, act.actor.id);
    await recordTrail(tx, act, { action: 'account.password-link', ...accountRecord(account) });
    return done({ token, userName: account.userName });
  });
}

export interface LinkPassword {
  readonly token: string;
  readonly password: string;
  readonly again: string;
  /** Whether the statement of accountability was ticked. */
  readonly accepted: boolean;
}

/**
 * Sets the password of a link's account, once. The account's sessions end, a lock after wrong passwords is
 * lifted, and the statement of accountability is accepted where it was not before.
 */
export async function setPasswordByLink(
  db: Database,
  input: LinkPassword,
  requestId: string
): Promise<Outcome<{ userName: string }>> {
  const found = await readPasswordLink(db, input.token);
  if (!found) return refuse('link-spent', 'There is no such link.');
  if (found.spent) return refuse('link-spent', found.spent);
  const fields = passwordFields(input.password, input.again, found.user, found.site);
  if (!input.accepted && !found.user.statementAcceptedAt)
    fields.accepted = 'Tick that you answer for your signatures; without that nobody signs here';
  if (Object.keys(fields).length > 0)
    return refuse('bad-input', 'The password is not set; the link is still good.', fields);
  const passwordHash = await hashPassword(input.password);
  return transact(db, async (tx) => {
    // Of two uses at once, the second waits here and finds the link used.
    const [account] = await tx.select().from(users).where(eq(users.id, found.user.id)).for('update');
    const current = await readPasswordLink(tx, input.token);
    if (!current || current.spent) return refuse('link-spent', current?.spent ?? 'There is no such link.');
    if (account.status !== 'active')
      return refuse('wrong-state', 'The account is not active. Nothing was changed.');
    await tx
      .update(passwordLinks)
      .set({ usedAt: sql`clock_timestamp()` })
      .where(eq(passwordLinks.id, current.id));
    const act = actOfOwner(account, current.site, requestId);
    await storePassword(tx, act, account, passwordHash, 'with a link');
    if (!account.statementAcceptedAt) await acceptStatement(tx, act, account);
    return done({ userName: account.userName });
  });
}

export interface PasswordChange {
  readonly old: string;
  readonly password: string;
  readonly again: string;
}

/** Changes one's own password; the old one is needed, and the other sessions end. The third wrong one ends the session. */
export async function changeOwnPassword(
  db: Database,
  act: Act,
  input: PasswordChange
): Promise<Outcome<{ sessionsEnded: number }>> {
  if (!can(act.actor, 'account.own')) return refuse('not-allowed', 'Your account has no role yet.');
  const [found] = await db
    .select({ user: users, site: sites })
    .from(users)
    .innerJoin(sites, eq(sites.id, users.siteId))
    .where(eq(users.id, act.actor.id));
  if (!found) return refuse('not-found', 'There is no such account.');
  if (!(await verifyPassword(found.user.passwordHash, input.old))) return countWrongOld(db, act);
  const fields = passwordFields(input.password, input.again, found.user, found.site);
  if (Object.keys(fields).length > 0) return refuse('bad-input', 'The old password still counts.', fields);
  const passwordHash = await hashPassword(input.password);
  return transact(db, async (tx) => {
    const [account] = await tx.select().from(users).where(eq(users.id, act.actor.id)).for('update');
    if (account.passwordHash !== found.user.passwordHash)
      return refuse('changed-meanwhile', 'The password was changed from elsewhere meanwhile.');
    return done({ sessionsEnded: await storePassword(tx, act, account, passwordHash, 'with the old one') });
  });
}

async function countWrongOld(db: Database, act: Act): Promise<Refusal> {
  const why = 'The old password is not right';
  const ended = await transact(db, async (tx) => {
    await recordTrail(tx, act, {
      action: 'account.password-refused',
      ...accountRecord(act.actor),
      reason: why
    });
    return act.sessionKey ? countInSession(tx, act, act.sessionKey, 'where the old one was asked') : false;
  });
  if (ended)
    return refuse(
      'not-signed-in',
      'The password was wrong for the third time, so you have been signed out. The old password still counts.'
    );
  return refuse('signature-wrong', `${why}. Nothing was changed.`, { old: why });
}

type Account = typeof users.$inferSelect;
type Site = typeof sites.$inferSelect;

function passwordFields(password: string, again: string, user: Account, site: Site): Record<string, string> {
  const fault = passwordFault(password, [user.userName, user.printedName, user.email, site.name, site.code]);
  if (fault) return { password: fault };
  return again === password ? {} : { again: 'The two are not the same; type the password again' };
}

/** Returns how many sessions ended: all but the one that acts. */
async function storePassword(
  tx: Transaction,
  act: Act,
  account: Account,
  passwordHash: string,
  how: string
): Promise<number> {
  await tx
    .update(users)
    .set({ passwordHash, failedAttempts: 0, lockedUntil: null })
    .where(eq(users.id, account.id));
  const others = act.sessionKey ? ne(sessions.tokenHash, act.sessionKey) : undefined;
  const ended = await tx
    .update(sessions)
    .set({ revokedAt: sql`clock_timestamp()`, revokedWhy: 'the password was set anew' })
    .where(and(eq(sessions.userId, account.id), isNull(sessions.revokedAt), others))
    .returning({ key: sessions.tokenHash });
  await recordTrail(tx, act, {
    action: 'account.password',
    ...accountRecord(account),
    after: { how, sessionsEnded: ended.length }
  });
  return ended.length;
}

async function acceptStatement(tx: Transaction, act: Act, account: Account): Promise<void> {
  await tx
    .update(users)
    .set({ statementAcceptedAt: sql`clock_timestamp()` })
    .where(eq(users.id, account.id));
  await recordTrail(tx, act, {
    action: 'account.statement',
    ...accountRecord(account),
    after: { statement: ACCOUNTABILITY_STATEMENT }
  });
}

const accountRecord = (account: { id: string; userName: string }) => ({
  recordType: 'account',
  recordId: account.id,
  recordLabel: `Account ${account.userName}`
});

function actOfOwner(account: Account, site: Site, requestId: string): Act {
  const { id, userName, printedName, siteId } = account;
  return {
    actor: { id, userName, printedName, siteId, timeZone: site.timeZone, demo: site.demo, roles: [] },
    requestId,
    sessionKey: null
  };
}

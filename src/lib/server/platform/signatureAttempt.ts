import { and, eq, isNull, lt, or, sql } from 'drizzle-orm';
import { SIGNATURE_ATTEMPTS } from '../../domain/accounts';
import { refuse, type Refusal } from '../../domain/refusals';
import type { Action } from '../../domain/roles';
import type { Executor, Transaction } from '../db/client';
import { sessions, users } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from './act';
import { acceptOneTimeCode } from './oneTimeCode';
import { verifyPassword } from './password';
import { recordTrail } from './trail';

type Account = typeof users.$inferSelect;

export interface IdentityClaim {
  readonly password: string;
  readonly oneTimeCode?: string;
  /** What the signature is for; gives the role it is made in. */
  readonly action: Action;
}

/** Why the person is not proven to be the account's owner; null where they are. Counts and records what failed. */
export async function whyNotProven(
  db: Executor,
  act: Act,
  signerId: string,
  claim: IdentityClaim
): Promise<Refusal | null> {
  const [account] = await db.select().from(users).where(eq(users.id, signerId));
  const barred = account ? whyNotSigner(account) : 'There is no such account.';
  if (barred) {
    await recordRefusal(db, act, signerId, barred);
    return refuse('not-allowed', `${barred} Nothing was signed.`);
  }
  const right =
    (await verifyPassword(account.passwordHash, claim.password)) &&
    (await oneTimeCodeRight(db, account, claim.oneTimeCode));
  return right ? forgetFailures(db, act) : countFailure(db, act, account);
}

function whyNotSigner(account: Account): string | null {
  if (account.status !== 'active') return 'This account is not active.';
  if (!account.proofedAt)
    return 'Your identity has not been recorded yet, so this account cannot sign; an administrator does that.';
  if (!account.statementAcceptedAt)
    return 'You have not accepted accountability for your signatures yet, so this account cannot sign.';
  return null;
}

async function oneTimeCodeRight(db: Executor, account: Account, given = ''): Promise<boolean> {
  if (!account.oneTimeCodeSecret) return true;
  const step = acceptOneTimeCode(account.oneTimeCodeSecret, given, account.oneTimeCodeLastStep, Date.now());
  if (step === null) return false;
  // Of two requests with the same code, one finds the step already used.
  const used = await db
    .update(users)
    .set({ oneTimeCodeLastStep: step })
    .where(
      and(
        eq(users.id, account.id),
        or(isNull(users.oneTimeCodeLastStep), lt(users.oneTimeCodeLastStep, step))
      )
    )
    .returning({ id: users.id });
  return used.length === 1;
}

async function forgetFailures(db: Executor, act: Act): Promise<null> {
  if (act.sessionKey)
    await db.update(sessions).set({ failedSignatures: 0 }).where(eq(sessions.tokenHash, act.sessionKey));
  return null;
}

async function countFailure(db: Executor, act: Act, account: Account): Promise<Refusal> {
  const ended = await transact(db, async (tx) => {
    await recordRefusal(tx, act, account.id, 'Wrong password or one-time code at a signature');
    return act.sessionKey !== null && (await countInSession(tx, act, act.sessionKey, 'at a signature'));
  });
  if (ended) {
    return refuse(
      'not-signed-in',
      'The password was wrong for the third time, so you have been signed out. Nothing was signed.'
    );
  }
  const field = account.oneTimeCodeSecret
    ? 'The password or the one-time code is not right'
    : 'The password is not right';
  return refuse('signature-wrong', `${field}. Nothing was signed.`, { password: field });
}

/** Counts a wrong password in a live session; the third ends it, and true is returned. */
export async function countInSession(
  tx: Transaction,
  act: Act,
  sessionKey: string,
  where: string
): Promise<boolean> {
  const [row] = await tx
    .update(sessions)
    .set({ failedSignatures: sql`${sessions.failedSignatures} + 1` })
    .where(eq(sessions.tokenHash, sessionKey))
    .returning({ failures: sessions.failedSignatures });
  if (!row || row.failures < SIGNATURE_ATTEMPTS) return false;
  const why = `${SIGNATURE_ATTEMPTS} wrong passwords ${where}`;
  await tx
    .update(sessions)
    .set({ revokedAt: sql`clock_timestamp()`, revokedWhy: why })
    .where(eq(sessions.tokenHash, sessionKey));
  await recordTrail(tx, act, {
    action: 'session.revoked',
    recordType: 'account',
    recordId: act.actor.id,
    recordLabel: `Account ${act.actor.userName}`,
    reason: why
  });
  return true;
}

const recordRefusal = (db: Executor, act: Act, signerId: string, reason: string) =>
  recordTrail(db, act, {
    action: 'signature.refused',
    recordType: 'account',
    recordId: signerId,
    recordLabel: `Account ${act.actor.userName}`,
    reason
  });

import { setTimeout as delay } from 'node:timers/promises';
import { and, eq, isNull, lt, or, sql } from 'drizzle-orm';
import { LOCK_MINUTES, SIGN_IN_ATTEMPTS } from '../../domain/accounts';
import type { Database, Transaction } from '../db/client';
import { sites, users } from '../db/schema';
import { transact } from '../db/transaction';
import { NO_ACCOUNT, type Act } from './act';
import { queueMail } from './mail';
import { acceptOneTimeCode } from './oneTimeCode';
import { verifyPassword } from './password';
import { endSession, openSession, touchSession } from './sessions';
import { recordTrail } from './trail';

export interface SignInClaim {
  readonly userName: string;
  readonly password: string;
  readonly oneTimeCode?: string;
  readonly address?: string;
  readonly userAgent?: string;
  readonly requestId: string;
}

interface Account {
  readonly id: string;
  readonly userName: string;
  readonly printedName: string;
  readonly siteId: string;
  readonly timeZone: string;
  readonly demo: boolean;
  readonly status: string;
  readonly passwordHash: string | null;
  readonly oneTimeCodeSecret: string | null;
  readonly oneTimeCodeLastStep: number | null;
  readonly locked: boolean;
}

/** A wrong sign-in is answered at the next of these beats after it came, whatever had to be done for it. */
const BEAT_MS = 250;

/**
 * Opens a session for the right user name and password and returns its token; null for everything else, the same
 * in answer and work: no such account, wrong password, locked, disabled. Five wrong passwords in a row lock the
 * account for a quarter of an hour, with a mail to the administrators. All of it is on the trail.
 */
export async function signInWithPassword(db: Database, claim: SignInClaim): Promise<string | null> {
  const cameAt = performance.now();
  const token = await tryPassword(db, claim);
  if (token === null) await delay(BEAT_MS - ((performance.now() - cameAt) % BEAT_MS));
  return token;
}

async function tryPassword(db: Database, claim: SignInClaim): Promise<string | null> {
  const account = await findAccount(db, claim.userName);
  const passwordRight = await verifyPassword(account?.passwordHash, claim.password);
  const codeStep = account ? secondFactorStep(account, claim.oneTimeCode ?? '') : null;
  return transact(db, async (tx) => {
    if (!account) return refuseUnknown(tx, claim);
    // Counted under the account's row lock: parallel guesses cannot share one count.
    const state = await lockedState(tx, account.id);
    if (!state.active) return refuseKnown(tx, account, claim, 'The account is not active');
    if (state.locked) return refuseKnown(tx, account, claim, 'The account is locked for now');
    if (!passwordRight || codeStep === 'wrong') return countWrong(tx, account, claim);
    if (!(await useCodeStep(tx, account.id, codeStep))) return countWrong(tx, account, claim);
    await tx.update(users).set({ failedAttempts: 0, lockedUntil: null }).where(eq(users.id, account.id));
    const token = await openSession(tx, account.id, claim);
    await recordTrail(tx, actOf(account, claim), {
      action: 'session.sign-in',
      ...accountRecord(account),
      after: sourceOf(claim)
    });
    return token;
  });
}

/** Ends the session of a token, on the trail. A token of no live session is nothing to end. */
export async function signOutToken(db: Database, token: string, requestId: string): Promise<void> {
  await transact(db, async (tx) => {
    const live = await touchSession(tx, token);
    if (!live || !(await endSession(tx, live.sessionKey, 'signed out'))) return;
    const act: Act = { actor: live.person, requestId, sessionKey: live.sessionKey };
    await recordTrail(tx, act, { action: 'session.sign-out', ...accountRecord(live.person) });
  });
}

async function findAccount(db: Database, userName: string): Promise<Account | null> {
  const [row] = await db
    .select({
      id: users.id,
      userName: users.userName,
      printedName: users.printedName,
      siteId: users.siteId,
      timeZone: sites.timeZone,
      demo: sites.demo,
      status: users.status,
      passwordHash: users.passwordHash,
      oneTimeCodeSecret: users.oneTimeCodeSecret,
      oneTimeCodeLastStep: users.oneTimeCodeLastStep,
      locked: sql<boolean>`coalesce(${users.lockedUntil} > clock_timestamp(), false)`
    })
    .from(users)
    .innerJoin(sites, eq(sites.id, users.siteId))
    .where(sql`lower(${users.userName}) = lower(${userName})`);
  return row ?? null;
}

function secondFactorStep(account: Account, given: string): number | 'wrong' | null {
  if (!account.oneTimeCodeSecret) return null;
  return (
    acceptOneTimeCode(account.oneTimeCodeSecret, given, account.oneTimeCodeLastStep, Date.now()) ?? 'wrong'
  );
}

async function useCodeStep(tx: Transaction, userId: string, step: number | null): Promise<boolean> {
  if (step === null) return true;
  const unused = or(isNull(users.oneTimeCodeLastStep), lt(users.oneTimeCodeLastStep, step));
  const used = await tx
    .update(users)
    .set({ oneTimeCodeLastStep: step })
    .where(and(eq(users.id, userId), unused))
    .returning({ id: users.id });
  return used.length === 1;
}

async function lockedState(tx: Transaction, userId: string) {
  const [row] = await tx
    .select({
      status: users.status,
      locked: sql<boolean>`coalesce(${users.lockedUntil} > clock_timestamp(), false)`
    })
    .from(users)
    .where(eq(users.id, userId))
    .for('update');
  return { active: row.status === 'active', locked: row.locked };
}

async function refuseUnknown(tx: Transaction, claim: SignInClaim): Promise<null> {
  // The name as typed may be a password in the wrong field: it is not kept.
  const act = actOf(
    {
      id: NO_ACCOUNT,
      userName: '',
      printedName: 'Somebody unknown',
      siteId: NO_ACCOUNT,
      timeZone: 'UTC',
      demo: false
    },
    claim
  );
  await recordTrail(tx, act, {
    action: 'session.sign-in-failed',
    role: 'none',
    recordType: 'account',
    recordId: 'unknown',
    recordLabel: 'An account that does not exist',
    after: sourceOf(claim),
    reason: 'No such account'
  });
  return null;
}

async function refuseKnown(
  tx: Transaction,
  account: Account,
  claim: SignInClaim,
  reason: string
): Promise<null> {
  await recordTrail(tx, actOf(account, claim), {
    action: 'session.sign-in-failed',
    role: 'none',
    ...accountRecord(account),
    after: sourceOf(claim),
    reason
  });
  return null;
}

async function countWrong(tx: Transaction, account: Account, claim: SignInClaim): Promise<null> {
  const [{ failures }] = await tx
    .update(users)
    .set({ failedAttempts: sql`${users.failedAttempts} + 1` })
    .where(eq(users.id, account.id))
    .returning({ failures: users.failedAttempts });
  await refuseKnown(tx, account, claim, 'Wrong password or one-time code');
  if (failures < SIGN_IN_ATTEMPTS) return null;
  await tx
    .update(users)
    .set({ failedAttempts: 0, lockedUntil: sql`clock_timestamp() + make_interval(mins => ${LOCK_MINUTES})` })
    .where(eq(users.id, account.id));
  const reason = `${SIGN_IN_ATTEMPTS} wrong passwords in a row; locked for ${LOCK_MINUTES} minutes`;
  await recordTrail(tx, actOf(account, claim), {
    action: 'account.locked',
    role: 'none',
    ...accountRecord(account),
    after: sourceOf(claim),
    reason
  });
  await queueMail(tx, {
    to: { action: 'admin.people', siteId: account.siteId },
    kind: 'account-locked',
    subject: `Account ${account.userName} is locked`,
    body: `The account ${account.userName} (${account.printedName}) was locked after ${reason.toLowerCase()}. If that was not its owner, find out who tried.`,
    link: '/admin'
  });
  return null;
}

const accountRecord = (account: { id: string; userName: string }) => ({
  recordType: 'account',
  recordId: account.id,
  recordLabel: `Account ${account.userName}`
});

const sourceOf = (claim: SignInClaim) => ({
  address: claim.address ?? null,
  userAgent: claim.userAgent?.slice(0, 300) ?? null
});

function actOf(
  account: Pick<Account, 'id' | 'userName' | 'printedName' | 'siteId' | 'timeZone' | 'demo'>,
  claim: SignInClaim
): Act {
  const { id, userName, printedName, siteId, timeZone, demo } = account;
  return {
    actor: { id, userName, printedName, siteId, timeZone, demo, roles: [] },
    requestId: claim.requestId,
    sessionKey: null
  };
}

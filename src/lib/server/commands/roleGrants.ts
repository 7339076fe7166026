import { and, eq, isNull, ne, sql } from 'drizzle-orm';
import { done, refuse, type Outcome, type Refusal } from '../../domain/refusals';
import { roleConflict } from '../../domain/roleConflicts';
import { can, PERMISSIONS, ROLE_NAMES, type RoleId } from '../../domain/roles';
import type { Database, Transaction } from '../db/client';
import { roleGrants, roleRequests, users } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { queueMail } from '../platform/mail';
import { proveIdentity, sign } from '../platform/signing';
import { recordTrail } from '../platform/trail';

type Account = typeof users.$inferSelect;
type Request = typeof roleRequests.$inferSelect;

/** Without these roles in active hands nobody could be given a role any more. */
const GRANTING_ROLES: readonly RoleId[] = [...PERMISSIONS['role.grant'], ...PERMISSIONS['admin.people']];

const sayWhy = (reason: string): Refusal | null =>
  reason.trim().length < 3
    ? refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' })
    : null;

/** Asks for a role for a person; it takes effect when a QA approver has signed for it. */
export async function requestRole(
  db: Database,
  act: Act,
  input: { readonly userId: string; readonly role: RoleId; readonly reason: string }
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'admin.people'))
    return refuse('not-allowed', 'Asking for a role is for administrators.');
  const unreasoned = sayWhy(input.reason);
  if (unreasoned) return unreasoned;
  return transact(db, async (tx) => {
    const account = await lockAccount(tx, act, input.userId);
    if (!account) return refuse('not-found', 'There is no such account.');
    const barred = await whyNoRole(tx, account, input.role);
    if (barred) return barred;
    const [row] = await tx
      .insert(roleRequests)
      .values({
        userId: account.id,
        role: input.role,
        reason: input.reason.trim(),
        requestedBy: act.actor.id,
        requestedByName: act.actor.printedName
      })
      .onConflictDoNothing()
      .returning({ id: roleRequests.id });
    if (!row) return refuse('already-exists', 'This role is asked for already and waits for a QA approver.');
    await recordTrail(tx, act, {
      action: 'role.request',
      ...accountRecord(account),
      after: { request: row.id, role: input.role },
      reason: input.reason.trim()
    });
    await queueMail(tx, {
      to: { action: 'role.grant', siteId: act.actor.siteId },
      kind: 'role-requested',
      subject: `A role waits for approval: ${ROLE_NAMES[input.role]} for ${account.printedName}`,
      body: `${act.actor.printedName} asks that ${account.printedName} (${account.userName}) may act as ${ROLE_NAMES[input.role]}. Reason: ${input.reason.trim()}`,
      link: '/roles'
    });
    return done({ id: row.id });
  });
}

export interface RoleDecision {
  readonly requestId: string;
  readonly outcome: 'granted' | 'declined';
  readonly reason: string;
  readonly password: string;
  readonly oneTimeCode?: string;
}

/** Grants or declines a role under an e-signature, by a third person: neither who asked nor who receives. */
export async function decideRole(
  db: Database,
  act: Act,
  input: RoleDecision
): Promise<Outcome<{ userId: string }>> {
  if (!can(act.actor, 'role.grant')) return refuse('not-allowed', 'Granting a role is for QA approvers.');
  const unreasoned = sayWhy(input.reason);
  if (unreasoned) return unreasoned;
  const proof = await proveIdentity(db, act, {
    password: input.password,
    oneTimeCode: input.oneTimeCode,
    action: 'role.grant'
  });
  if (!proof.ok) return proof;
  return transact(db, async (tx) => {
    const [request] = await tx
      .select()
      .from(roleRequests)
      .where(eq(roleRequests.id, input.requestId))
      .for('update');
    // The grantee's row is locked too: two grants at once cannot pass the rule of conflicts one beside the other.
    const account = request && (await lockAccount(tx, act, request.userId));
    if (!request || !account) return refuse('not-found', 'There is no such request.');
    const barred = whyNotDecider(act, request);
    if (barred) return barred;
    const noRole = input.outcome === 'granted' ? await whyNoRole(tx, account, request.role) : null;
    if (noRole) return noRole;
    const signature = await sign(tx, act, proof.value, {
      meaning: input.outcome,
      recordType: 'role-request',
      recordId: request.id,
      record: signedRecord(request, account, input),
      reason: input.reason.trim()
    });
    await tx
      .update(roleRequests)
      .set({
        outcome: input.outcome,
        decidedBy: act.actor.id,
        decidedByName: act.actor.printedName,
        decisionReason: input.reason.trim(),
        decidedAt: signature.signedAt,
        signatureId: signature.id
      })
      .where(eq(roleRequests.id, request.id));
    if (input.outcome === 'granted') {
      const { userId, role, reason, requestedBy } = request;
      await tx.insert(roleGrants).values({ userId, role, reason, requestedBy, grantedBy: act.actor.id });
    }
    await recordTrail(tx, act, {
      action: input.outcome === 'granted' ? 'role.grant' : 'role.decline',
      ...accountRecord(account),
      after: { request: request.id, role: request.role, signature: signature.id },
      reason: input.reason.trim()
    });
    return done({ userId: account.id });
  });
}

/** Ends a role at once. The site keeps at least one administrator and one QA approver who can act. */
export async function endRole(
  db: Database,
  act: Act,
  input: { readonly userId: string; readonly role: RoleId; readonly reason: string }
): Promise<Outcome<{ userId: string }>> {
  if (!can(act.actor, 'admin.people')) return refuse('not-allowed', 'Ending a role is for administrators.');
  const unreasoned = sayWhy(input.reason);
  if (unreasoned) return unreasoned;
  if (input.userId === act.actor.id)
    return refuse('own-work', 'Another administrator must change your own account.');
  return transact(db, async (tx) => {
    const account = await lockAccount(tx, act, input.userId);
    if (!account) return refuse('not-found', 'There is no such account.');
    if (GRANTING_ROLES.includes(input.role) && !(await othersHold(tx, account, input.role)))
      return refuse(
        'wrong-state',
        `${account.printedName} is the only active ${ROLE_NAMES[input.role]}; nobody could grant roles any more. Grant the role to another person first.`
      );
    const ended = await tx
      .update(roleGrants)
      .set({ endedAt: sql`clock_timestamp()`, endedBy: act.actor.id, endReason: input.reason.trim() })
      .where(
        and(eq(roleGrants.userId, account.id), eq(roleGrants.role, input.role), isNull(roleGrants.endedAt))
      )
      .returning({ id: roleGrants.id });
    if (ended.length === 0) return refuse('wrong-state', 'The person does not hold this role now.');
    await recordTrail(tx, act, {
      action: 'role.end',
      ...accountRecord(account),
      before: { role: input.role },
      reason: input.reason.trim()
    });
    return done({ userId: account.id });
  });
}

async function lockAccount(tx: Transaction, act: Act, userId: string): Promise<Account | null> {
  const [row] = await tx
    .select()
    .from(users)
    .where(and(eq(users.id, userId), eq(users.siteId, act.actor.siteId)))
    .for('update');
  return row ?? null;
}

async function whyNoRole(tx: Transaction, account: Account, role: RoleId): Promise<Refusal | null> {
  if (account.status !== 'active')
    return refuse('wrong-state', 'The account is not active, so it receives no role.');
  const held = await tx
    .select({ role: roleGrants.role })
    .from(roleGrants)
    .where(and(eq(roleGrants.userId, account.id), isNull(roleGrants.endedAt)));
  if (held.some((grant) => grant.role === role))
    return refuse('already-exists', `${account.printedName} holds this role already.`);
  const conflict = roleConflict(
    held.map((grant) => grant.role),
    role
  );
  return conflict ? refuse('wrong-state', conflict, { role: conflict }) : null;
}

function whyNotDecider(act: Act, request: Request): Refusal | null {
  if (request.outcome !== null)
    return refuse('wrong-state', `The request was ${request.outcome} already by ${request.decidedByName}.`);
  if (request.requestedBy === act.actor.id)
    return refuse('own-work', 'You asked for this role, so another approver must decide it.');
  if (request.userId === act.actor.id)
    return refuse('own-work', 'The role would be yours, so another approver must decide it.');
  return null;
}

const signedRecord = (request: Request, account: Account, decision: RoleDecision) => ({
  type: 'role-request',
  id: request.id,
  userName: account.userName,
  personId: account.personId,
  printedName: account.printedName,
  role: request.role,
  reason: request.reason,
  requestedBy: request.requestedByName,
  outcome: decision.outcome,
  decisionReason: decision.reason.trim()
});

async function othersHold(tx: Transaction, account: Account, role: RoleId): Promise<boolean> {
  // Locked, so that the last two holders cannot be ended by two administrators at once.
  const rows = await tx
    .select({ id: roleGrants.id })
    .from(roleGrants)
    .innerJoin(users, eq(users.id, roleGrants.userId))
    .where(
      and(
        eq(roleGrants.role, role),
        isNull(roleGrants.endedAt),
        ne(users.id, account.id),
        eq(users.siteId, account.siteId),
        eq(users.status, 'active')
      )
    )
    .for('update', { of: roleGrants });
  return rows.length > 0;
}

const accountRecord = (account: Account) => ({
  recordType: 'account',
  recordId: account.id,
  recordLabel: `Account ${account.userName}`
});

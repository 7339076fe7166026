import { and, asc, desc, eq, isNull } from 'drizzle-orm';
import { alias } from 'drizzle-orm/pg-core';
import type { Executor } from '../db/client';
import { roleGrants, roleRequests, users } from '../db/schema';

/** Requests for roles that nobody has decided yet, oldest first; of the whole site, or for one person. */
export async function listWaitingRoles(db: Executor, siteId: string, userId?: string) {
  return db
    .select({
      id: roleRequests.id,
      userId: roleRequests.userId,
      printedName: users.printedName,
      userName: users.userName,
      personId: users.personId,
      role: roleRequests.role,
      reason: roleRequests.reason,
      requestedBy: roleRequests.requestedBy,
      requestedByName: roleRequests.requestedByName,
      requestedAt: roleRequests.requestedAt
    })
    .from(roleRequests)
    .innerJoin(users, eq(users.id, roleRequests.userId))
    .where(
      and(
        eq(users.siteId, siteId),
        isNull(roleRequests.outcome),
        userId === undefined ? undefined : eq(roleRequests.userId, userId)
      )
    )
    .orderBy(asc(roleRequests.requestedAt));
}

/** Every role a person ever held: who asked, granted and ended it, when and why; newest first. */
export async function listGrants(db: Executor, userId: string) {
  const requester = alias(users, 'requester');
  const granter = alias(users, 'granter');
  const ender = alias(users, 'ender');
  return db
    .select({
      id: roleGrants.id,
      role: roleGrants.role,
      reason: roleGrants.reason,
      requestedByName: requester.printedName,
      grantedByName: granter.printedName,
      grantedAt: roleGrants.grantedAt,
      endedAt: roleGrants.endedAt,
      endedByName: ender.printedName,
      endReason: roleGrants.endReason
    })
    .from(roleGrants)
    .leftJoin(requester, eq(requester.id, roleGrants.requestedBy))
    .leftJoin(granter, eq(granter.id, roleGrants.grantedBy))
    .leftJoin(ender, eq(ender.id, roleGrants.endedBy))
    .where(eq(roleGrants.userId, userId))
    .orderBy(desc(roleGrants.grantedAt));
}

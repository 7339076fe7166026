import { sql } from 'drizzle-orm';
import { check, index, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import { ROLE_IDS } from '../../../domain/roles';
import { idKey, instant } from './columns';
import { users } from './people';
import { signatures } from './signatures';

/** A role asked for; it takes effect with another person's signature. A decided request stays as it is. */
export const roleRequests = pgTable(
  'role_requests',
  {
    id: idKey(),
    userId: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    role: text({ enum: ROLE_IDS }).notNull(),
    reason: text().notNull(),
    requestedBy: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    requestedByName: text().notNull(),
    requestedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    outcome: text({ enum: ['granted', 'declined'] }),
    decidedBy: uuid().references(() => users.id, { onDelete: 'restrict' }),
    decidedByName: text(),
    decisionReason: text(),
    decidedAt: instant(),
    signatureId: uuid().references(() => signatures.id, { onDelete: 'restrict' })
  },
  (t) => [
    check(
      'role_requests_role_known',
      sql`${t.role} in ('operator','method_owner','approver','auditor','administrator')`
    ),
    check('role_requests_outcome_known', sql`${t.outcome} is null or ${t.outcome} in ('granted','declined')`),
    check(
      'role_requests_third_person',
      sql`${t.decidedBy} is null or (${t.decidedBy} <> ${t.requestedBy} and ${t.decidedBy} <> ${t.userId})`
    ),
    check(
      'role_requests_decided_whole',
      sql`num_nulls(${t.outcome}, ${t.decidedBy}, ${t.decidedByName}, ${t.decisionReason}, ${t.decidedAt}, ${t.signatureId}) in (0, 6)`
    ),
    uniqueIndex('role_requests_one_waiting')
      .on(t.userId, t.role)
      .where(sql`${t.outcome} is null`),
    index('role_requests_user').on(t.userId)
  ]
);

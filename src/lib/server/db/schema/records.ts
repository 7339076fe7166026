import { sql } from 'drizzle-orm';
import { check, date, index, integer, jsonb, pgTable, text, uuid } from 'drizzle-orm/pg-core';
import { CAUSE_CATEGORIES, DEVIATION_ORIGINS, DEVIATION_PHASES } from '../../../domain/deviations';
import { DISPOSITION_OUTCOMES } from '../../../domain/lots';
import { bytea, idKey, instant } from './columns';
import { users } from './people';
import { containers, lots } from './receipts';
import { scans } from './scans';
import { signatures } from './signatures';

/** A lot's disposition; a later change is a new, signed row. Append-only. */
export const dispositions = pgTable(
  'dispositions',
  {
    id: idKey(),
    lotId: uuid()
      .notNull()
      .references(() => lots.id, { onDelete: 'restrict' }),
    outcome: text({ enum: DISPOSITION_OUTCOMES }).notNull(),
    reason: text().notNull(),
    /** Containers rejected by name where only part of the lot is. */
    rejectedContainerIds: uuid()
      .array()
      .notNull()
      .default(sql`'{}'`),
    signatureId: uuid()
      .notNull()
      .references(() => signatures.id, { onDelete: 'restrict' }),
    decidedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [index('dispositions_lot').on(t.lotId)]
);

/** The certificate's PDF, stored once. Append-only. */
export const certificates = pgTable(
  'certificates',
  {
    id: idKey(),
    number: text().notNull().unique(),
    lotId: uuid()
      .notNull()
      .references(() => lots.id, { onDelete: 'restrict' }),
    dispositionId: uuid()
      .notNull()
      .unique()
      .references(() => dispositions.id, { onDelete: 'restrict' }),
    verificationCode: text().notNull().unique(),
    pdf: bytea().notNull(),
    sha256: text().notNull(),
    /** The tree head printed on it. */
    treeSize: integer().notNull(),
    treeRoot: text().notNull(),
    issuedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [check('certificates_hash_true', sql`${t.sha256} = encode(sha256(${t.pdf}), 'hex')`)]
);

export const deviations = pgTable(
  'deviations',
  {
    id: idKey(),
    number: text().notNull().unique(),
    title: text().notNull(),
    origin: text({ enum: DEVIATION_ORIGINS }).notNull(),
    lotId: uuid().references(() => lots.id, { onDelete: 'restrict' }),
    containerId: uuid().references(() => containers.id, { onDelete: 'restrict' }),
    scanId: uuid().references(() => scans.id, { onDelete: 'restrict' }),
    phase: text({ enum: DEVIATION_PHASES }).notNull().default('assess'),
    assigneeId: uuid().references(() => users.id, { onDelete: 'restrict' }),
    dueOn: date(),
    description: text().notNull().default(''),
    causeCategory: text({ enum: CAUSE_CATEGORIES }),
    cause: text(),
    impact: text(),
    action: text(),
    openedBy: uuid().references(() => users.id, { onDelete: 'restrict' }),
    openedByName: text().notNull(),
    openedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    closedAt: instant(),
    conclusionSignatureId: uuid().references(() => signatures.id, { onDelete: 'restrict' })
  },
  (t) => [
    index('deviations_lot').on(t.lotId),
    check(
      'deviations_closed_signed',
      sql`(${t.phase} = 'closed') = (${t.closedAt} is not null and ${t.conclusionSignatureId} is not null)`
    ),
    check(
      'deviations_closed_reasoned',
      sql`${t.phase} <> 'closed' or (${t.causeCategory} is not null and length(${t.cause}) > 0 and length(${t.impact}) > 0 and length(${t.action}) > 0)`
    )
  ]
);

/** Notes and linked evidence of a deviation. Append-only. */
export const deviationNotes = pgTable('deviation_notes', {
  id: idKey(),
  deviationId: uuid()
    .notNull()
    .references(() => deviations.id, { onDelete: 'restrict' }),
  note: text().notNull(),
  evidence: jsonb().$type<{ type: string; id: string; label: string }[]>().notNull().default([]),
  byUserId: uuid().references(() => users.id, { onDelete: 'restrict' }),
  byName: text().notNull(),
  at: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

/** Last used number per series and year (lots, deliveries, deviations, certificates …). */
export const numberSeries = pgTable('number_series', {
  series: text().primaryKey(),
  last: integer().notNull()
});

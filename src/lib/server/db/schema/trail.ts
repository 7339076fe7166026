import { sql } from 'drizzle-orm';
import { bigint, index, integer, jsonb, pgTable, primaryKey, text, uuid } from 'drizzle-orm/pg-core';
import { idKey, instant, xid8 } from './columns';
import { users } from './people';
import { signatures } from './signatures';

/**
 * The audit trail. Written in the same transaction as the change; a trigger sets time, transaction id,
 * canonical content and its hash, whatever the writer says. Append-only.
 */
export const trailEntries = pgTable(
  'trail_entries',
  {
    id: bigint({ mode: 'number' }).primaryKey().generatedAlwaysAsIdentity(),
    xid: xid8()
      .notNull()
      .default(sql`pg_current_xact_id()`),
    at: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    /** Null for an act of the system itself; the name then says which service and version. */
    actorId: uuid(),
    actorName: text().notNull(),
    actorRole: text().notNull(),
    /** What was done, e.g. `lot.release` (domain/trail.ts). */
    action: text().notNull(),
    recordType: text().notNull(),
    recordId: text().notNull(),
    /** How people name the record, e.g. `Lot L-2026-0007`. */
    recordLabel: text().notNull(),
    /** Lot the record belongs to, so that a lot's whole story is one query. */
    lotId: uuid(),
    before: jsonb().$type<Record<string, unknown>>(),
    after: jsonb().$type<Record<string, unknown>>(),
    reason: text(),
    requestId: text(),
    /** Canonical text that is hashed (made by the trigger). */
    content: text().notNull().default(''),
    /** SHA-256 of the content, hex (made by the trigger). */
    contentHash: text().notNull().default('')
  },
  (t) => [
    // The sealer asks for entries of transactions since it last looked.
    index('trail_entries_xid').on(t.xid),
    index('trail_entries_record').on(t.recordType, t.recordId),
    index('trail_entries_lot').on(t.lotId),
    index('trail_entries_actor').on(t.actorId, t.at),
    index('trail_entries_at').on(t.at),
    index('trail_entries_action').on(t.action)
  ]
);

/** Order of sealed entries: leaf n of the RFC 6962 tree. Append-only. */
export const trailLeaves = pgTable('trail_leaves', {
  leafIndex: bigint({ mode: 'number' }).primaryKey(),
  entryId: bigint({ mode: 'number' }).notNull().unique(),
  /** SHA-256(0x00 || content), hex. */
  leafHash: text().notNull(),
  sealedAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

/** Interior nodes of full subtrees, for proofs: level 0 is the leaves' parents. Append-only. */
export const trailNodes = pgTable(
  'trail_nodes',
  { level: integer().notNull(), nodeIndex: bigint({ mode: 'number' }).notNull(), hash: text().notNull() },
  (t) => [primaryKey({ columns: [t.level, t.nodeIndex] })]
);

/** Signed tree heads. Append-only. */
export const treeHeads = pgTable('tree_heads', {
  size: bigint({ mode: 'number' }).primaryKey(),
  rootHash: text().notNull(),
  at: instant().notNull(),
  keyId: text().notNull(),
  /** Ed25519 over the head's text (domain/trail.ts treeHeadText), base64. */
  signature: text().notNull()
});

/** A signed review of the trail: "reviewed up to entry N, remarks". Append-only. */
export const trailReviews = pgTable('trail_reviews', {
  id: idKey(),
  fromSize: bigint({ mode: 'number' }).notNull(),
  toSize: bigint({ mode: 'number' }).notNull(),
  scope: jsonb().$type<Record<string, unknown>>().notNull().default({}),
  findings: text().notNull(),
  signatureId: uuid()
    .notNull()
    .references(() => signatures.id, { onDelete: 'restrict' }),
  reviewedBy: uuid()
    .notNull()
    .references(() => users.id, { onDelete: 'restrict' }),
  reviewedAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

/** A person's saved trail filters. */
export const savedFilters = pgTable('saved_filters', {
  id: idKey(),
  userId: uuid()
    .notNull()
    .references(() => users.id, { onDelete: 'restrict' }),
  page: text().notNull(),
  name: text().notNull(),
  query: text().notNull(),
  createdAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

/** Transactional outbox of mail: written with the change it tells of, sent afterwards with retries. */
export const outboxMails = pgTable(
  'outbox_mails',
  {
    id: idKey(),
    toUserId: uuid().references(() => users.id, { onDelete: 'restrict' }),
    toAddress: text().notNull(),
    kind: text().notNull(),
    subject: text().notNull(),
    body: text().notNull(),
    status: text({ enum: ['waiting', 'sent', 'failed'] })
      .notNull()
      .default('waiting'),
    attempts: integer().notNull().default(0),
    lastError: text(),
    nextAttemptAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    sentAt: instant()
  },
  (t) => [
    index('outbox_mails_waiting')
      .on(t.nextAttemptAt)
      .where(sql`${t.status} = 'waiting'`)
  ]
);

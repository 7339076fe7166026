import { sql } from 'drizzle-orm';
import { check, index, pgTable, text, uuid } from 'drizzle-orm/pg-core';
import { SIGNATURE_MEANINGS } from '../../../domain/signatures';
import { bytea, idKey, instant } from './columns';
import { users } from './people';

/** An electronic signature bound to the SHA-256 of the signed record's canonical JSON. Append-only. */
export const signatures = pgTable(
  'signatures',
  {
    id: idKey(),
    signerId: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    printedName: text().notNull(),
    role: text().notNull(),
    meaning: text({ enum: SIGNATURE_MEANINGS }).notNull(),
    reason: text().notNull().default(''),
    recordType: text().notNull(),
    recordId: text().notNull(),
    /** Canonical JSON (RFC 8785) of what was signed. */
    record: bytea().notNull(),
    recordSha256: text().notNull(),
    signedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [
    index('signatures_record').on(t.recordType, t.recordId),
    check('signatures_hash_true', sql`${t.recordSha256} = encode(sha256(${t.record}), 'hex')`)
  ]
);

import { sql } from 'drizzle-orm';
import { check, index, integer, pgTable, text } from 'drizzle-orm/pg-core';
import { bytea, idKey, instant } from './columns';

/** Bytes exactly as they came, with their SHA-256. Append-only. */
export const rawFiles = pgTable(
  'raw_files',
  {
    id: idKey(),
    sha256: text().notNull(),
    bytes: bytea().notNull(),
    size: integer().notNull(),
    /** Name the sender gave it: shown, never used as a path. */
    fileName: text().notNull(),
    mediaType: text().notNull(),
    receivedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [
    index('raw_files_sha256').on(t.sha256),
    check('raw_files_hash_true', sql`${t.sha256} = encode(sha256(${t.bytes}), 'hex')`),
    check('raw_files_size_true', sql`${t.size} = octet_length(${t.bytes})`)
  ]
);

import { sql } from 'drizzle-orm';
import {
  check,
  index,
  integer,
  jsonb,
  pgTable,
  primaryKey,
  text,
  uniqueIndex,
  uuid
} from 'drizzle-orm/pg-core';
import type { MethodDefinition } from '../../../identity/method';
import { METHOD_VERSION_STATUSES, RUN_KINDS, RUN_STATUSES } from '../../../domain/methods';
import { bytea, idKey, instant } from './columns';
import { materials, referenceSpectra } from './materials';
import { users } from './people';
import { rawFiles } from './rawFiles';
import { signatures } from './signatures';

/** The identity method of a material; its versions carry the content. */
export const methods = pgTable('methods', {
  id: idKey(),
  materialId: uuid()
    .notNull()
    .unique()
    .references(() => materials.id, { onDelete: 'restrict' }),
  code: text().notNull().unique(),
  createdAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

/** One version: a draft may change, an effective one never (trigger and privilege). */
export const methodVersions = pgTable(
  'method_versions',
  {
    id: idKey(),
    methodId: uuid()
      .notNull()
      .references(() => methods.id, { onDelete: 'restrict' }),
    version: integer().notNull(),
    status: text({ enum: METHOD_VERSION_STATUSES }).notNull().default('draft'),
    definition: jsonb().$type<MethodDefinition>().notNull(),
    intendedUse: text().notNull().default(''),
    changeReason: text().notNull().default(''),
    /** Counts saved edits of a draft, so that two editors meet a conflict and not lost work. */
    revision: integer().notNull().default(1),
    /** Canonical JSON of the fitted method (identity/method.ts FittedMethod) and its SHA-256. */
    bundle: bytea(),
    bundleSha256: text(),
    authorId: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    authorName: text().notNull(),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    submittedAt: instant(),
    authorSignatureId: uuid().references(() => signatures.id, { onDelete: 'restrict' }),
    approverId: uuid().references(() => users.id, { onDelete: 'restrict' }),
    approverSignatureId: uuid().references(() => signatures.id, { onDelete: 'restrict' }),
    effectiveAt: instant(),
    endedAt: instant(),
    endReason: text()
  },
  (t) => [
    uniqueIndex('method_versions_number').on(t.methodId, t.version),
    uniqueIndex('method_versions_one_effective')
      .on(t.methodId)
      .where(sql`${t.status} = 'effective'`),
    check(
      'method_versions_bundle_hash_true',
      sql`(${t.bundle} is null) = (${t.bundleSha256} is null) and (${t.bundle} is null or ${t.bundleSha256} = encode(sha256(${t.bundle}), 'hex'))`
    ),
    check('method_versions_four_eyes', sql`${t.approverId} is null or ${t.approverId} <> ${t.authorId}`),
    check(
      'method_versions_effective_whole',
      sql`${t.status} not in ('effective','superseded') or (${t.bundle} is not null and ${t.bundleSha256} is not null and ${t.effectiveAt} is not null and ${t.approverId} is not null)`
    )
  ]
);

/** Which references a version is built on. */
export const methodVersionReferences = pgTable(
  'method_version_references',
  {
    methodVersionId: uuid()
      .notNull()
      .references(() => methodVersions.id, { onDelete: 'restrict' }),
    referenceId: uuid()
      .notNull()
      .references(() => referenceSpectra.id, { onDelete: 'restrict' })
  },
  (t) => [
    primaryKey({ columns: [t.methodVersionId, t.referenceId] }),
    index('mvr_reference').on(t.referenceId)
  ]
);

/**
 * All approved materials' representative spectra at one time; append-only. A row is added whenever the
 * content changes, so the newest is the current one and a decision's own is always there for its replay.
 */
export const libraries = pgTable(
  'libraries',
  {
    id: idKey(),
    sha256: text().notNull(),
    /** Packed entries (identity/library.ts). */
    content: bytea().notNull(),
    entryCount: integer().notNull(),
    madeAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [index('libraries_made').on(t.madeAt)]
);

/** A queued long run over a method version (validation, impact): progress and evidence. */
export const methodRuns = pgTable(
  'method_runs',
  {
    id: idKey(),
    methodVersionId: uuid()
      .notNull()
      .references(() => methodVersions.id, { onDelete: 'restrict' }),
    kind: text({ enum: RUN_KINDS }).notNull(),
    status: text({ enum: RUN_STATUSES }).notNull().default('waiting'),
    done: integer().notNull().default(0),
    total: integer().notNull().default(0),
    /** SHA-256 of the bundle the run was made on. */
    bundleSha256: text(),
    evidence: jsonb().$type<Record<string, unknown>>(),
    acknowledgementSignatureId: uuid().references(() => signatures.id, { onDelete: 'restrict' }),
    requestedBy: uuid().references(() => users.id, { onDelete: 'restrict' }),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    finishedAt: instant()
  },
  (t) => [index('method_runs_version').on(t.methodVersionId, t.createdAt)]
);

/** A sealed set of spectra a method is challenged with; never used to build it. */
export const challengeSets = pgTable('challenge_sets', {
  id: idKey(),
  name: text().notNull().unique(),
  materialId: uuid().references(() => materials.id, { onDelete: 'restrict' }),
  curatorId: uuid().references(() => users.id, { onDelete: 'restrict' }),
  uses: integer().notNull().default(0),
  createdAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

export const challengeSpectra = pgTable('challenge_spectra', {
  id: idKey(),
  setId: uuid()
    .notNull()
    .references(() => challengeSets.id, { onDelete: 'restrict' }),
  /** What it truly is; null means no approved material at all. */
  materialId: uuid().references(() => materials.id, { onDelete: 'restrict' }),
  sourceLot: text().notNull(),
  rawFileId: uuid()
    .notNull()
    .references(() => rawFiles.id, { onDelete: 'restrict' })
});

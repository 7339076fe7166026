import { sql } from 'drizzle-orm';
import {
  boolean,
  check,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  uniqueIndex,
  uuid
} from 'drizzle-orm/pg-core';
import { bytea, idKey, instant } from './columns';
import { instruments, performanceChecks } from './instruments';
import { libraries, methodVersions } from './methods';
import { users } from './people';
import { rawFiles } from './rawFiles';
import { containers, lots } from './receipts';

/** One measurement of one container. Never edited or deleted; a repeat adds a scan. */
export const scans = pgTable(
  'scans',
  {
    /** Made by the client, so that sending twice records once. */
    id: uuid().primaryKey(),
    lotId: uuid()
      .notNull()
      .references(() => lots.id, { onDelete: 'restrict' }),
    containerId: uuid()
      .notNull()
      .references(() => containers.id, { onDelete: 'restrict' }),
    /** 1 for the first scan of a container, without gaps. */
    attempt: integer().notNull(),
    instrumentId: uuid()
      .notNull()
      .references(() => instruments.id, { onDelete: 'restrict' }),
    performanceCheckId: uuid().references(() => performanceChecks.id, { onDelete: 'restrict' }),
    methodVersionId: uuid()
      .notNull()
      .references(() => methodVersions.id, { onDelete: 'restrict' }),
    rawFileId: uuid()
      .notNull()
      .references(() => rawFiles.id, { onDelete: 'restrict' }),
    /** How the reader was told to read the file (spectra/formats ReadOptions). */
    readOptions: jsonb().$type<Record<string, unknown>>().notNull().default({}),
    acquisition: jsonb().$type<Record<string, unknown>>().notNull().default({}),
    repeatReason: text(),
    repeatGrantId: uuid(),
    operatorId: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    operatorName: text().notNull(),
    /** When the client says the file was chosen: a claim beside the record time. */
    clientTime: instant(),
    sentLate: boolean().notNull().default(false),
    recordedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [
    uniqueIndex('scans_attempt').on(t.containerId, t.attempt),
    index('scans_lot').on(t.lotId),
    index('scans_method_version').on(t.methodVersionId),
    check('scans_attempt_positive', sql`${t.attempt} > 0`),
    check('scans_repeat_reasoned', sql`${t.attempt} = 1 or length(${t.repeatReason}) > 0`)
  ]
);

/** The decision on a scan, with everything needed to compute it again. Append-only. */
export const decisions = pgTable(
  'decisions',
  {
    id: idKey(),
    scanId: uuid()
      .notNull()
      .unique()
      .references(() => scans.id, { onDelete: 'restrict' }),
    verdict: text({ enum: ['pass', 'fail', 'inconclusive', 'invalid'] }).notNull(),
    nearLimit: boolean().notNull(),
    engineVersion: text().notNull(),
    libraryId: uuid()
      .notNull()
      .references(() => libraries.id, { onDelete: 'restrict' }),
    /** Axis correction that was applied, from the instrument's check at that time. */
    axisShiftCm1: doublePrecision(),
    axisScale: doublePrecision(),
    /** Whether a check within its validity stood behind the scan; an input of the decision. */
    checkState: text({ enum: ['valid', 'missing', 'expired'] }).notNull(),
    correlation: doublePrecision(),
    hotellingT2: doublePrecision(),
    t2Limit: doublePrecision(),
    qResidual: doublePrecision(),
    qLimit: doublePrecision(),
    bestRivalCorrelation: doublePrecision(),
    signalToNoise: doublePrecision(),
    /** Canonical JSON (RFC 8785) of identity/decision.ts Decision, and its SHA-256. */
    result: bytea().notNull(),
    resultSha256: text().notNull(),
    decidedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [
    index('decisions_verdict').on(t.verdict),
    check('decisions_hash_true', sql`${t.resultSha256} = encode(sha256(${t.result}), 'hex')`)
  ]
);

/** Asking for, and granting, another scan after a fail or after too many measurements without a result. */
export const repeatRequests = pgTable(
  'repeat_requests',
  {
    id: idKey(),
    containerId: uuid()
      .notNull()
      .references(() => containers.id, { onDelete: 'restrict' }),
    /** The scan after which it was asked. */
    scanId: uuid()
      .notNull()
      .references(() => scans.id, { onDelete: 'restrict' }),
    cause: text().notNull(),
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
    signatureId: uuid(),
    /** The scan that used the grant: a grant is good once. */
    usedByScanId: uuid()
  },
  (t) => [
    uniqueIndex('repeat_requests_one_open')
      .on(t.containerId)
      .where(sql`${t.outcome} is null`),
    check('repeat_requests_not_own', sql`${t.decidedBy} is null or ${t.decidedBy} <> ${t.requestedBy}`),
    check('repeat_requests_whole', sql`(${t.outcome} is null) = (${t.decidedBy} is null)`)
  ]
);

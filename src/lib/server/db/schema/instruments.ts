import { sql } from 'drizzle-orm';
import {
  boolean,
  check,
  date,
  doublePrecision,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  uniqueIndex,
  uuid
} from 'drizzle-orm/pg-core';
import { INSTRUMENT_STATUSES, LOGBOOK_KINDS } from '../../../domain/instruments';
import { idKey, instant } from './columns';
import { sites, users } from './people';
import { rawFiles } from './rawFiles';

export const instruments = pgTable(
  'instruments',
  {
    id: idKey(),
    siteId: uuid()
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    /** Short name on the bench, e.g. RM-2. */
    name: text().notNull().unique(),
    serial: text().notNull().unique(),
    model: text().notNull().default(''),
    firmware: text().notNull().default(''),
    excitationNm: doublePrecision().notNull(),
    rangeFromCm1: doublePrecision().notNull(),
    rangeToCm1: doublePrecision().notNull(),
    resolutionCm1: doublePrecision().notNull(),
    location: text().notNull(),
    status: text({ enum: INSTRUMENT_STATUSES }).notNull().default('in_service'),
    nextQualificationOn: date(),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [
    check('instruments_excitation_sane', sql`${t.excitationNm} between 200 and 2000`),
    check('instruments_range_ascends', sql`${t.rangeFromCm1} < ${t.rangeToCm1}`)
  ]
);

/** Allowed deviations per band: an approved, versioned record, never a constant. */
export const toleranceSets = pgTable(
  'tolerance_sets',
  {
    id: idKey(),
    name: text().notNull(),
    version: integer().notNull(),
    standard: text().notNull(),
    /** Band position cm-1 to allowed deviation cm-1. */
    bands: jsonb().$type<{ shiftCm1: number; toleranceCm1: number }[]>().notNull(),
    source: text().notNull(),
    effectiveFrom: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    approvedBy: uuid().references(() => users.id, { onDelete: 'restrict' })
  },
  (t) => [uniqueIndex('tolerance_sets_version').on(t.name, t.standard, t.version)]
);

/** An instrument's performance check with a standard: kept whatever its outcome. Append-only. */
export const performanceChecks = pgTable(
  'performance_checks',
  {
    id: idKey(),
    instrumentId: uuid()
      .notNull()
      .references(() => instruments.id, { onDelete: 'restrict' }),
    standard: text().notNull(),
    standardLot: text().notNull().default(''),
    toleranceSetId: uuid().references(() => toleranceSets.id, { onDelete: 'restrict' }),
    rawFileId: uuid()
      .notNull()
      .references(() => rawFiles.id, { onDelete: 'restrict' }),
    /** Full result: bands found/expected/deviation/tolerance, resolution, signal-to-noise. */
    result: jsonb().$type<Record<string, unknown>>().notNull(),
    axisShiftCm1: doublePrecision(),
    axisScale: doublePrecision(),
    passed: boolean().notNull(),
    performedBy: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    performedByName: text().notNull(),
    performedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    validUntil: instant()
  },
  (t) => [
    index('performance_checks_instrument').on(t.instrumentId, t.performedAt),
    check('performance_checks_valid_if_passed', sql`${t.passed} = (${t.validUntil} is not null)`)
  ]
);

/** The instrument's logbook: use, checks, service, moves, faults. Append-only. */
export const instrumentLog = pgTable(
  'instrument_log',
  {
    id: idKey(),
    instrumentId: uuid()
      .notNull()
      .references(() => instruments.id, { onDelete: 'restrict' }),
    kind: text({ enum: LOGBOOK_KINDS }).notNull(),
    entry: text().notNull(),
    byUserId: uuid().references(() => users.id, { onDelete: 'restrict' }),
    byName: text().notNull(),
    at: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [index('instrument_log_instrument').on(t.instrumentId, t.at)]
);

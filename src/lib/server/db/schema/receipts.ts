import { sql } from 'drizzle-orm';
import { check, date, index, integer, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import { CONTAINER_STATUSES } from '../../../domain/containers';
import { DELIVERY_STATUSES } from '../../../domain/deliveries';
import { LIMIT_TEST_OUTCOMES, LOT_STATUSES, PAPER_KINDS, SAMPLING_PLANS } from '../../../domain/lots';
import { idKey, instant } from './columns';
import { manufacturers, materials, suppliers } from './materials';
import { methodVersions } from './methods';
import { sites, users } from './people';
import { rawFiles } from './rawFiles';

export const deliveries = pgTable(
  'deliveries',
  {
    id: idKey(),
    siteId: uuid()
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    number: text().notNull().unique(),
    deliveryNote: text().notNull(),
    supplierId: uuid()
      .notNull()
      .references(() => suppliers.id, { onDelete: 'restrict' }),
    carrier: text().notNull().default(''),
    condition: text().notNull().default(''),
    status: text({ enum: DELIVERY_STATUSES }).notNull().default('landed'),
    /** When the goods came, as the operator states it. */
    arrivedOn: date().notNull(),
    receivedBy: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    receivedByName: text().notNull(),
    receivedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [uniqueIndex('deliveries_note_once').on(t.supplierId, t.deliveryNote)]
);

/** One manufacturer's batch in one delivery: the unit of release. */
export const lots = pgTable(
  'lots',
  {
    id: idKey(),
    lotNumber: text().notNull().unique(),
    deliveryId: uuid()
      .notNull()
      .references(() => deliveries.id, { onDelete: 'restrict' }),
    materialId: uuid()
      .notNull()
      .references(() => materials.id, { onDelete: 'restrict' }),
    manufacturerId: uuid()
      .notNull()
      .references(() => manufacturers.id, { onDelete: 'restrict' }),
    manufacturerBatch: text().notNull(),
    expiresOn: date(),
    retestOn: date(),
    containerCount: integer().notNull(),
    samplingPlan: text({ enum: SAMPLING_PLANS }).notNull().default('every_container'),
    samplingReason: text(),
    status: text({ enum: LOT_STATUSES }).notNull().default('quarantine'),
    /** The version the lot's first scan used: a later version never cuts in mid-lot. */
    methodVersionId: uuid().references(() => methodVersions.id, { onDelete: 'restrict' }),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [
    check('lots_count_sane', sql`${t.containerCount} between 1 and 2000`),
    check(
      'lots_reduced_plan_reasoned',
      sql`${t.samplingPlan} = 'every_container' or length(${t.samplingReason}) > 0`
    ),
    index('lots_delivery').on(t.deliveryId),
    index('lots_status').on(t.status)
  ]
);

export const containers = pgTable(
  'containers',
  {
    id: idKey(),
    lotId: uuid()
      .notNull()
      .references(() => lots.id, { onDelete: 'restrict' }),
    number: integer().notNull(),
    barcode: text().notNull().unique(),
    packaging: text().notNull().default('drum'),
    status: text({ enum: CONTAINER_STATUSES }).notNull().default('awaiting'),
    /** Visual examination on receipt. */
    condition: text().notNull().default('sound'),
    inPlan: text({ enum: ['yes', 'no'] })
      .notNull()
      .default('yes')
  },
  (t) => [
    uniqueIndex('containers_number').on(t.lotId, t.number),
    check('containers_number_positive', sql`${t.number} > 0`)
  ]
);

/** Certificates of analysis, photographs and other papers. Append-only. */
export const lotPapers = pgTable('lot_papers', {
  id: idKey(),
  lotId: uuid()
    .notNull()
    .references(() => lots.id, { onDelete: 'restrict' }),
  kind: text({ enum: PAPER_KINDS }).notNull(),
  rawFileId: uuid()
    .notNull()
    .references(() => rawFiles.id, { onDelete: 'restrict' }),
  note: text().notNull().default(''),
  addedBy: uuid()
    .notNull()
    .references(() => users.id, { onDelete: 'restrict' }),
  addedByName: text().notNull(),
  addedAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

/** Ethylene and diethylene glycol limit-test result of a high-risk lot. Append-only. */
export const limitTests = pgTable('limit_tests', {
  id: idKey(),
  lotId: uuid()
    .notNull()
    .references(() => lots.id, { onDelete: 'restrict' }),
  outcome: text({ enum: LIMIT_TEST_OUTCOMES }).notNull(),
  reportNumber: text().notNull(),
  recordedBy: uuid()
    .notNull()
    .references(() => users.id, { onDelete: 'restrict' }),
  recordedByName: text().notNull(),
  recordedAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

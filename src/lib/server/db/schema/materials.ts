import { sql } from 'drizzle-orm';
import { boolean, check, date, index, jsonb, pgTable, text, uniqueIndex, uuid } from 'drizzle-orm/pg-core';
import {
  MATERIAL_STATUSES,
  RAMAN_SUITABILITIES,
  REFERENCE_KINDS,
  REFERENCE_STATUSES
} from '../../../domain/materials';
import { idKey, instant } from './columns';
import { instruments } from './instruments';
import { users } from './people';
import { rawFiles } from './rawFiles';

/** A starting material as the plant buys it. */
export const materials = pgTable(
  'materials',
  {
    id: idKey(),
    itemCode: text().notNull().unique(),
    name: text().notNull(),
    casNumber: text(),
    grade: text().notNull().default(''),
    ramanSuitability: text({ enum: RAMAN_SUITABILITIES }).notNull().default('suitable'),
    suitabilityReason: text(),
    dark: boolean().notNull().default(false),
    energetic: boolean().notNull().default(false),
    lightSensitive: boolean().notNull().default(false),
    /** Ethylene and diethylene glycol limit test asked for before release. */
    degEgHighRisk: boolean().notNull().default(false),
    /** Packaging it may be scanned through. */
    packaging: text()
      .array()
      .notNull()
      .default(sql`'{}'`),
    status: text({ enum: MATERIAL_STATUSES }).notNull().default('active'),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    createdBy: uuid().references(() => users.id, { onDelete: 'restrict' })
  },
  (t) => [
    check(
      'materials_unsuitable_explained',
      sql`${t.ramanSuitability} = 'suitable' or length(${t.suitabilityReason}) > 0`
    )
  ]
);

export const suppliers = pgTable('suppliers', {
  id: idKey(),
  code: text().notNull().unique(),
  name: text().notNull(),
  createdAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

export const manufacturers = pgTable('manufacturers', {
  id: idKey(),
  code: text().notNull().unique(),
  name: text().notNull(),
  country: text().notNull().default(''),
  createdAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

/** Who may supply what from whom. */
export const approvedSources = pgTable(
  'approved_sources',
  {
    id: idKey(),
    materialId: uuid()
      .notNull()
      .references(() => materials.id, { onDelete: 'restrict' }),
    supplierId: uuid()
      .notNull()
      .references(() => suppliers.id, { onDelete: 'restrict' }),
    manufacturerId: uuid()
      .notNull()
      .references(() => manufacturers.id, { onDelete: 'restrict' }),
    approvedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    withdrawnAt: instant()
  },
  (t) => [
    uniqueIndex('approved_sources_one_open')
      .on(t.materialId, t.supplierId, t.manufacturerId)
      .where(sql`${t.withdrawnAt} is null`)
  ]
);

/** A spectrum of known material, with its provenance. */
export const referenceSpectra = pgTable(
  'reference_spectra',
  {
    id: idKey(),
    number: text().notNull().unique(),
    materialId: uuid()
      .notNull()
      .references(() => materials.id, { onDelete: 'restrict' }),
    rawFileId: uuid()
      .notNull()
      .references(() => rawFiles.id, { onDelete: 'restrict' }),
    kind: text({ enum: REFERENCE_KINDS }).notNull(),
    /** Manufacturer's lot or reference-standard lot it was taken from: the unit of cross-validation. */
    sourceLot: text().notNull(),
    certificate: text().notNull().default(''),
    independentIdentity: text().notNull().default(''),
    instrumentId: uuid().references(() => instruments.id, { onDelete: 'restrict' }),
    excitationNm: text().notNull(),
    expiresOn: date(),
    quality: jsonb().$type<Record<string, unknown>>().notNull().default({}),
    status: text({ enum: REFERENCE_STATUSES }).notNull().default('draft'),
    statusReason: text(),
    addedBy: uuid().references(() => users.id, { onDelete: 'restrict' }),
    addedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [
    index('reference_spectra_material').on(t.materialId, t.status),
    uniqueIndex('reference_spectra_file_once').on(t.materialId, t.rawFileId)
  ]
);

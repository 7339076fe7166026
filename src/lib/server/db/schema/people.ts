import { sql } from 'drizzle-orm';
import {
  boolean,
  check,
  foreignKey,
  index,
  integer,
  jsonb,
  pgTable,
  text,
  uniqueIndex,
  uuid
} from 'drizzle-orm/pg-core';
import { ACCOUNT_STATUSES } from '../../../domain/accounts';
import { ROLE_IDS } from '../../../domain/roles';
import { idKey, instant } from './columns';

/** A plant. Its settings are the quality unit's choices that decisions and rules read. */
export const sites = pgTable('sites', {
  id: idKey(),
  code: text().notNull().unique(),
  name: text().notNull(),
  dock: text().notNull(),
  /** IANA zone in which times are shown; records are UTC. */
  timeZone: text().notNull(),
  /** How many times an operator may repeat a measurement that gave no result. */
  invalidRepeatLimit: integer().notNull().default(3),
  /** How long a passed performance check counts, hours. */
  checkValidHours: integer().notNull().default(24),
  /** Whether a sampling plan other than every container may be chosen. */
  reducedSamplingAllowed: boolean().notNull().default(false),
  /** Set by the demo seed; marks every page and PDF. */
  demo: boolean().notNull().default(false),
  createdAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`)
});

/** One account is one named human; accounts are disabled, never deleted. */
export const users = pgTable(
  'users',
  {
    id: idKey(),
    siteId: uuid()
      .notNull()
      .references(() => sites.id, { onDelete: 'restrict' }),
    /** Sign-in name, never used again for another person. */
    userName: text().notNull(),
    /** Personnel number: one human, one account. */
    personId: text().notNull().unique(),
    printedName: text().notNull(),
    email: text().notNull(),
    passwordHash: text(),
    status: text({ enum: ACCOUNT_STATUSES }).notNull().default('active'),
    /** Identity proof (who saw it and when); without it the account cannot sign. */
    proofedAt: instant(),
    proofedBy: text(),
    /** Signed statement of accountability for one's signatures. */
    statementAcceptedAt: instant(),
    failedAttempts: integer().notNull().default(0),
    lockedUntil: instant(),
    oneTimeCodeSecret: text(),
    oneTimeCodeLastStep: integer(),
    preferences: jsonb().$type<Record<string, unknown>>().notNull().default({}),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [
    uniqueIndex('users_user_name_key').on(sql`lower(${t.userName})`),
    check('users_status_known', sql`${t.status} in ('active', 'locked', 'suspended', 'left')`)
  ]
);

/** A role held over a time. The grant is never edited, only ended. */
export const roleGrants = pgTable(
  'role_grants',
  {
    id: idKey(),
    userId: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    role: text({ enum: ROLE_IDS }).notNull(),
    requestedBy: uuid().references(() => users.id, { onDelete: 'restrict' }),
    grantedBy: uuid().references(() => users.id, { onDelete: 'restrict' }),
    reason: text().notNull(),
    grantedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    endedAt: instant(),
    endedBy: uuid().references(() => users.id, { onDelete: 'restrict' }),
    endReason: text()
  },
  (t) => [
    check(
      'role_grants_role_known',
      sql`${t.role} in ('operator','method_owner','approver','auditor','administrator')`
    ),
    check('role_grants_not_own', sql`${t.grantedBy} is null or ${t.grantedBy} <> ${t.userId}`),
    check('role_grants_end_reasoned', sql`(${t.endedAt} is null) = (${t.endReason} is null)`),
    uniqueIndex('role_grants_one_open')
      .on(t.userId, t.role)
      .where(sql`${t.endedAt} is null`)
  ]
);

/** Server-side session; the cookie holds a token whose SHA-256 is the key. */
export const sessions = pgTable(
  'sessions',
  {
    tokenHash: text().primaryKey(),
    userId: uuid().notNull(),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    lastSeenAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    expiresAt: instant().notNull(),
    revokedAt: instant(),
    revokedWhy: text(),
    address: text(),
    userAgent: text(),
    failedSignatures: integer().notNull().default(0)
  },
  (t) => [
    foreignKey({ columns: [t.userId], foreignColumns: [users.id] }).onDelete('restrict'),
    index('sessions_user').on(t.userId)
  ]
);

/** A link with which a person sets their own password: used once, for a quarter of an hour. Holds no token, only its SHA-256. */
export const passwordLinks = pgTable(
  'password_links',
  {
    id: idKey(),
    tokenHash: text().notNull().unique(),
    userId: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    /** The administrator who asked for it; null where the installation made it. */
    createdBy: uuid().references(() => users.id, { onDelete: 'restrict' }),
    createdAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`),
    expiresAt: instant().notNull(),
    usedAt: instant(),
    /** Set when a newer link took its place. */
    withdrawnAt: instant()
  },
  (t) => [index('password_links_user').on(t.userId)]
);

/** Bearer token of an instrument PC: shown once, stored as a hash, revocable. */
export const apiTokens = pgTable('api_tokens', {
  id: idKey(),
  name: text().notNull(),
  tokenHash: text().notNull().unique(),
  scopes: text().array().notNull(),
  instrumentId: uuid(),
  /** The person who answers for what the token sends. */
  ownerId: uuid()
    .notNull()
    .references(() => users.id, { onDelete: 'restrict' }),
  createdAt: instant()
    .notNull()
    .default(sql`clock_timestamp()`),
  lastUsedAt: instant(),
  revokedAt: instant()
});

/** That a person has read a caution this shift. */
export const cautionAcknowledgements = pgTable(
  'caution_acknowledgements',
  {
    id: idKey(),
    userId: uuid()
      .notNull()
      .references(() => users.id, { onDelete: 'restrict' }),
    caution: text().notNull(),
    acknowledgedAt: instant()
      .notNull()
      .default(sql`clock_timestamp()`)
  },
  (t) => [index('caution_acknowledgements_user').on(t.userId, t.caution, t.acknowledgedAt)]
);

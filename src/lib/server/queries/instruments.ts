import { asc, desc, eq } from 'drizzle-orm';
import { checkState, type CheckState } from '../../domain/instruments';
import type { Executor } from '../db/client';
import { instrumentLog, instruments, performanceChecks, toleranceSets } from '../db/schema';
import { serverNow } from './clock';

export type Instrument = typeof instruments.$inferSelect;
export type PerformanceCheck = typeof performanceChecks.$inferSelect;

export interface InstrumentStanding {
  readonly instrument: Instrument;
  readonly lastCheck: PerformanceCheck | null;
  readonly state: CheckState;
}

/** The instrument with its last performance check and whether it may be used now. */
export async function getInstrument(db: Executor, id: string): Promise<InstrumentStanding | null> {
  const [instrument] = await db.select().from(instruments).where(eq(instruments.id, id));
  if (!instrument) return null;
  const [last] = await db
    .select()
    .from(performanceChecks)
    .where(eq(performanceChecks.instrumentId, id))
    .orderBy(desc(performanceChecks.performedAt))
    .limit(1);
  return { instrument, lastCheck: last ?? null, state: checkState(last ?? null, await serverNow(db)) };
}

/** Every instrument of the site with its standing. */
export async function listInstruments(db: Executor, siteId: string): Promise<InstrumentStanding[]> {
  const rows = await db
    .select()
    .from(instruments)
    .where(eq(instruments.siteId, siteId))
    .orderBy(asc(instruments.name));
  const last = await db
    .selectDistinctOn([performanceChecks.instrumentId])
    .from(performanceChecks)
    .orderBy(performanceChecks.instrumentId, desc(performanceChecks.performedAt));
  const now = await serverNow(db);
  return rows.map((instrument) => {
    const lastCheck = last.find((check) => check.instrumentId === instrument.id) ?? null;
    return { instrument, lastCheck, state: checkState(lastCheck, now) };
  });
}

export async function listChecks(
  db: Executor,
  instrumentId: string,
  limit = 50
): Promise<PerformanceCheck[]> {
  return db
    .select()
    .from(performanceChecks)
    .where(eq(performanceChecks.instrumentId, instrumentId))
    .orderBy(desc(performanceChecks.performedAt))
    .limit(limit);
}

export async function listLogbook(db: Executor, instrumentId: string, limit = 100) {
  return db
    .select()
    .from(instrumentLog)
    .where(eq(instrumentLog.instrumentId, instrumentId))
    .orderBy(desc(instrumentLog.at))
    .limit(limit);
}

/** Newest version of each tolerance set of a standard. */
export async function listToleranceSets(db: Executor, standard?: string) {
  return db
    .selectDistinctOn([toleranceSets.standard, toleranceSets.name])
    .from(toleranceSets)
    .where(standard === undefined ? undefined : eq(toleranceSets.standard, standard))
    .orderBy(toleranceSets.standard, toleranceSets.name, desc(toleranceSets.version));
}

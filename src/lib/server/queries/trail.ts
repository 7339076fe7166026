import { and, desc, eq, gte, ilike, lt, lte, or, sql, type SQL } from 'drizzle-orm';
import type { Executor } from '../db/client';
import { trailEntries, trailLeaves, treeHeads } from '../db/schema';

export interface TrailFilter {
  readonly who?: string;
  readonly action?: string;
  readonly record?: string;
  readonly recordType?: string;
  readonly recordId?: string;
  readonly lotId?: string;
  /** Calendar dates, inclusive, in the site's zone. */
  readonly from?: string;
  readonly to?: string;
  readonly timeZone: string;
}

export const TRAIL_PAGE = 50;

/** Escapes what LIKE would take as a wildcard. */
const literal = (text: string) => `%${text.replaceAll(/[\\%_]/g, (character) => `\\${character}`)}%`;

function conditions(filter: TrailFilter): SQL | undefined {
  const parts: (SQL | undefined)[] = [];
  if (filter.who) parts.push(ilike(trailEntries.actorName, literal(filter.who)));
  if (filter.action) parts.push(eq(trailEntries.action, filter.action));
  if (filter.record)
    parts.push(
      or(ilike(trailEntries.recordLabel, literal(filter.record)), eq(trailEntries.recordId, filter.record))
    );
  if (filter.recordType) parts.push(eq(trailEntries.recordType, filter.recordType));
  if (filter.recordId) parts.push(eq(trailEntries.recordId, filter.recordId));
  if (filter.lotId) parts.push(eq(trailEntries.lotId, filter.lotId));
  if (filter.from)
    parts.push(gte(trailEntries.at, sql`(${filter.from}::date)::timestamp at time zone ${filter.timeZone}`));
  if (filter.to)
    parts.push(lt(trailEntries.at, sql`(${filter.to}::date + 1)::timestamp at time zone ${filter.timeZone}`));
  return and(...parts);
}

/** One page of the trail, newest first, with how many entries match in all. */
export async function listTrail(db: Executor, filter: TrailFilter, page: number) {
  const where = conditions(filter);
  const [{ total }] = await db
    .select({ total: sql<number>`count(*)::int` })
    .from(trailEntries)
    .where(where);
  const entries = await db
    .select({ entry: trailEntries, leafIndex: trailLeaves.leafIndex })
    .from(trailEntries)
    .leftJoin(trailLeaves, eq(trailLeaves.entryId, trailEntries.id))
    .where(where)
    .orderBy(desc(trailEntries.id))
    .limit(TRAIL_PAGE)
    .offset((page - 1) * TRAIL_PAGE);
  return { total, entries };
}

/** Actions that occur in the trail, for the filter. */
export async function listTrailActions(db: Executor): Promise<string[]> {
  const rows = await db
    .selectDistinct({ action: trailEntries.action })
    .from(trailEntries)
    .orderBy(trailEntries.action);
  return rows.map((row) => row.action);
}

/** How far the trail is sealed. */
export async function getSealState(db: Executor) {
  const [head] = await db.select().from(treeHeads).orderBy(desc(treeHeads.size)).limit(1);
  const [{ entries }] = await db.select({ entries: sql<number>`count(*)::int` }).from(trailEntries);
  return { head: head ?? null, entries, unsealed: entries - (head?.size ?? 0) };
}

/** Entries about one lot up to a number, oldest first, for its page. */
export async function listLotHistory(db: Executor, lotId: string, upTo = Number.MAX_SAFE_INTEGER) {
  return db
    .select()
    .from(trailEntries)
    .where(and(eq(trailEntries.lotId, lotId), lte(trailEntries.id, upTo)))
    .orderBy(trailEntries.id);
}

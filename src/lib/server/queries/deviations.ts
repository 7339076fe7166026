import { asc, desc, eq, ne } from 'drizzle-orm';
import type { Executor } from '../db/client';
import { deviationNotes, deviations, lots, users } from '../db/schema';

/** Deviations, open ones first, newest first. */
export async function listDeviations(db: Executor, openOnly = false) {
  return db
    .select({
      id: deviations.id,
      number: deviations.number,
      title: deviations.title,
      origin: deviations.origin,
      phase: deviations.phase,
      lotNumber: lots.lotNumber,
      assignee: users.printedName,
      dueOn: deviations.dueOn,
      openedByName: deviations.openedByName,
      openedAt: deviations.openedAt,
      closedAt: deviations.closedAt
    })
    .from(deviations)
    .leftJoin(lots, eq(lots.id, deviations.lotId))
    .leftJoin(users, eq(users.id, deviations.assigneeId))
    .where(openOnly ? ne(deviations.phase, 'closed') : undefined)
    .orderBy(desc(deviations.openedAt));
}

export async function getDeviation(db: Executor, id: string) {
  const [row] = await db
    .select({ deviation: deviations, lot: lots })
    .from(deviations)
    .leftJoin(lots, eq(lots.id, deviations.lotId))
    .where(eq(deviations.id, id));
  return row ?? null;
}

export async function listDeviationNotes(db: Executor, deviationId: string) {
  return db
    .select()
    .from(deviationNotes)
    .where(eq(deviationNotes.deviationId, deviationId))
    .orderBy(asc(deviationNotes.at));
}

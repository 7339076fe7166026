import { and, asc, eq, inArray, isNull, ne, sql } from 'drizzle-orm';
import { can, ROLE_NAMES, type Actor } from '../../domain/roles';
import type { Executor } from '../db/client';
import {
  containers,
  deliveries,
  deviations,
  lots,
  materials,
  methodVersions,
  methods,
  repeatRequests
} from '../db/schema';
import { listInstruments } from './instruments';
import { listWaitingRoles } from './roleGrants';

/** One line of work waiting: what, since when, and where to do it. */
export interface TallyLine {
  readonly kind:
    | 'lot-to-scan'
    | 'lot-to-review'
    | 'repeat-to-decide'
    | 'repeat-granted'
    | 'check-due'
    | 'deviation-open'
    | 'method-to-approve'
    | 'role-to-approve';
  readonly label: string;
  readonly detail: string;
  readonly href: string;
  readonly since: Date;
  readonly done?: number;
  readonly total?: number;
}

/** What waits for this person's roles, oldest first. */
export async function listTally(db: Executor, actor: Actor & { siteId: string }): Promise<TallyLine[]> {
  const lines: TallyLine[] = [];
  if (can(actor, 'scan.record'))
    lines.push(...(await lotsToScan(db, actor.siteId)), ...(await repeatsGranted(db)));
  if (can(actor, 'instrument.check')) lines.push(...(await checksDue(db, actor.siteId)));
  if (can(actor, 'repeat.grant')) lines.push(...(await repeatsToDecide(db)));
  if (can(actor, 'lot.release')) lines.push(...(await lotsToReview(db, actor.siteId)));
  if (can(actor, 'deviation.work')) lines.push(...(await deviationsOpen(db)));
  if (can(actor, 'method.approve')) lines.push(...(await methodsToApprove(db, actor.id)));
  if (can(actor, 'role.grant')) lines.push(...(await rolesToApprove(db, actor)));
  return lines.sort((a, b) => a.since.getTime() - b.since.getTime());
}

const lotLine = {
  id: lots.id,
  lotNumber: lots.lotNumber,
  material: materials.name,
  createdAt: lots.createdAt,
  total: lots.containerCount,
  passed: sql<number>`(select count(*)::int from ${containers} c where c.lot_id = ${lots.id} and c.status = 'pass')`,
  awaiting: sql<number>`(select count(*)::int from ${containers} c where c.lot_id = ${lots.id} and c.status = 'awaiting')`
};

async function lotsToScan(db: Executor, siteId: string): Promise<TallyLine[]> {
  const rows = await db
    .select(lotLine)
    .from(lots)
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .where(
      and(
        eq(deliveries.siteId, siteId),
        inArray(lots.status, ['quarantine', 'held']),
        eq(materials.ramanSuitability, 'suitable')
      )
    )
    .orderBy(asc(lots.createdAt));
  return rows
    .filter((row) => row.awaiting > 0)
    .map((row) => ({
      kind: 'lot-to-scan',
      label: `Lot ${row.lotNumber}`,
      detail: row.material,
      href: `/bay/${row.id}`,
      since: row.createdAt,
      done: row.passed,
      total: row.total
    }));
}

async function lotsToReview(db: Executor, siteId: string): Promise<TallyLine[]> {
  const rows = await db
    .select(lotLine)
    .from(lots)
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .where(and(eq(deliveries.siteId, siteId), inArray(lots.status, ['quarantine', 'under_review', 'held'])))
    .orderBy(asc(lots.createdAt));
  return rows
    .filter((row) => row.awaiting === 0)
    .map((row) => ({
      kind: 'lot-to-review',
      label: `Lot ${row.lotNumber}`,
      detail: row.material,
      href: `/lots/${row.id}`,
      since: row.createdAt,
      done: row.passed,
      total: row.total
    }));
}

async function repeatsToDecide(db: Executor): Promise<TallyLine[]> {
  const rows = await repeatRows(db, isNull(repeatRequests.outcome));
  return rows.map((row) => ({
    kind: 'repeat-to-decide',
    label: `Container ${row.number} of lot ${row.lotNumber}`,
    detail: `Repeat asked: ${row.reason}`,
    href: `/lots/${row.lotId}#repeats`,
    since: row.since
  }));
}

async function repeatsGranted(db: Executor): Promise<TallyLine[]> {
  const rows = await repeatRows(
    db,
    and(eq(repeatRequests.outcome, 'granted'), isNull(repeatRequests.usedByScanId))
  );
  return rows.map((row) => ({
    kind: 'repeat-granted',
    label: `Container ${row.number} of lot ${row.lotNumber}`,
    detail: 'Repeat granted',
    href: `/bay/${row.lotId}`,
    since: row.since
  }));
}

async function repeatRows(db: Executor, where: ReturnType<typeof and>) {
  return db
    .select({
      number: containers.number,
      lotId: lots.id,
      lotNumber: lots.lotNumber,
      reason: repeatRequests.reason,
      since: repeatRequests.requestedAt
    })
    .from(repeatRequests)
    .innerJoin(containers, eq(containers.id, repeatRequests.containerId))
    .innerJoin(lots, eq(lots.id, containers.lotId))
    .where(where)
    .orderBy(asc(repeatRequests.requestedAt));
}

async function checksDue(db: Executor, siteId: string): Promise<TallyLine[]> {
  const standings = await listInstruments(db, siteId);
  return standings
    .filter((standing) => standing.state !== 'valid' && standing.instrument.status === 'in_service')
    .map((standing) => ({
      kind: 'check-due',
      label: `Instrument ${standing.instrument.name}`,
      detail: standing.state === 'failed' ? 'Last performance check failed' : 'Performance check due',
      href: `/instruments/${standing.instrument.id}`,
      since: standing.lastCheck?.validUntil ?? standing.instrument.createdAt
    }));
}

async function deviationsOpen(db: Executor): Promise<TallyLine[]> {
  const rows = await db
    .select()
    .from(deviations)
    .where(ne(deviations.phase, 'closed'))
    .orderBy(asc(deviations.openedAt));
  return rows.map((row) => ({
    kind: 'deviation-open',
    label: `Deviation ${row.number}`,
    detail: row.title,
    href: `/deviations/${row.id}`,
    since: row.openedAt
  }));
}

async function methodsToApprove(db: Executor, actorId: string): Promise<TallyLine[]> {
  const rows = await db
    .select({
      id: methodVersions.id,
      version: methodVersions.version,
      code: methods.code,
      since: methodVersions.submittedAt,
      createdAt: methodVersions.createdAt,
      authorName: methodVersions.authorName
    })
    .from(methodVersions)
    .innerJoin(methods, eq(methods.id, methodVersions.methodId))
    .where(and(eq(methodVersions.status, 'in_review'), ne(methodVersions.authorId, actorId)));
  return rows.map((row) => ({
    kind: 'method-to-approve',
    label: `Method ${row.code} version ${row.version}`,
    detail: `Submitted by ${row.authorName}`,
    href: `/methods/${row.id}`,
    since: row.since ?? row.createdAt
  }));
}

async function rolesToApprove(db: Executor, actor: Actor & { siteId: string }): Promise<TallyLine[]> {
  const waiting = await listWaitingRoles(db, actor.siteId);
  return waiting
    .filter((row) => row.requestedBy !== actor.id && row.userId !== actor.id)
    .map((row) => ({
      kind: 'role-to-approve',
      label: `${ROLE_NAMES[row.role]} for ${row.printedName}`,
      detail: `Asked by ${row.requestedByName}: ${row.reason}`,
      href: '/roles',
      since: row.requestedAt
    }));
}

import { and, asc, count, desc, eq, inArray, ne, sql } from 'drizzle-orm';
import { releaseConditions, type ReleaseCondition } from '../../domain/release';
import type { Executor } from '../db/client';
import {
  certificates,
  containers,
  deliveries,
  deviations,
  dispositions,
  limitTests,
  lotPapers,
  lots,
  manufacturers,
  materials,
  methodVersions,
  rawFiles,
  repeatRequests,
  signatures,
  suppliers
} from '../db/schema';
import { siteToday } from './clock';
import { listScans, type ScanSummary } from './scans';

const lotColumns = {
  id: lots.id,
  lotNumber: lots.lotNumber,
  status: lots.status,
  material: materials.name,
  itemCode: materials.itemCode,
  manufacturerBatch: lots.manufacturerBatch,
  deliveryId: lots.deliveryId,
  delivery: deliveries.number,
  expiresOn: lots.expiresOn,
  containerCount: lots.containerCount,
  createdAt: lots.createdAt,
  passed: sql<number>`(select count(*)::int from ${containers} c where c.lot_id = ${lots.id} and c.status = 'pass')`,
  stopped: sql<number>`(select count(*)::int from ${containers} c where c.lot_id = ${lots.id} and c.status in ('fail','inconclusive','set_aside'))`
};

/** Lots of the site, newest first; optionally only those in some states. */
export async function listLots(
  db: Executor,
  siteId: string,
  statuses?: (typeof lots.$inferSelect)['status'][]
) {
  return db
    .select(lotColumns)
    .from(lots)
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .where(and(eq(deliveries.siteId, siteId), statuses ? inArray(lots.status, statuses) : undefined))
    .orderBy(desc(lots.createdAt), desc(lots.lotNumber));
}

export type LotRow = Awaited<ReturnType<typeof listLots>>[number];

/** Lots of one delivery. */
export async function listLotsOfDelivery(db: Executor, deliveryId: string) {
  return db
    .select(lotColumns)
    .from(lots)
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .where(eq(lots.deliveryId, deliveryId))
    .orderBy(asc(lots.lotNumber));
}

/** A lot with everything its page shows, or null (also for another site's). */
export async function getLot(db: Executor, siteId: string, id: string) {
  const [head] = await db
    .select({
      lot: lots,
      material: materials,
      manufacturer: manufacturers,
      delivery: deliveries,
      supplier: suppliers
    })
    .from(lots)
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(manufacturers, eq(manufacturers.id, lots.manufacturerId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .innerJoin(suppliers, eq(suppliers.id, deliveries.supplierId))
    .where(and(eq(lots.id, id), eq(deliveries.siteId, siteId)));
  if (!head) return null;
  return {
    ...head,
    containers: await db
      .select()
      .from(containers)
      .where(eq(containers.lotId, id))
      .orderBy(asc(containers.number)),
    scans: await listScans(db, id),
    papers: await listPapers(db, id),
    limitTests: await db
      .select()
      .from(limitTests)
      .where(eq(limitTests.lotId, id))
      .orderBy(desc(limitTests.recordedAt)),
    deviations: await db
      .select()
      .from(deviations)
      .where(eq(deviations.lotId, id))
      .orderBy(desc(deviations.openedAt)),
    dispositions: await listDispositions(db, id)
  };
}

export type LotDetail = NonNullable<Awaited<ReturnType<typeof getLot>>>;

async function listPapers(db: Executor, lotId: string) {
  return db
    .select({
      id: lotPapers.id,
      kind: lotPapers.kind,
      note: lotPapers.note,
      fileName: rawFiles.fileName,
      size: rawFiles.size,
      sha256: rawFiles.sha256,
      addedByName: lotPapers.addedByName,
      addedAt: lotPapers.addedAt
    })
    .from(lotPapers)
    .innerJoin(rawFiles, eq(rawFiles.id, lotPapers.rawFileId))
    .where(eq(lotPapers.lotId, lotId))
    .orderBy(asc(lotPapers.addedAt));
}

async function listDispositions(db: Executor, lotId: string) {
  return db
    .select({
      id: dispositions.id,
      outcome: dispositions.outcome,
      reason: dispositions.reason,
      decidedAt: dispositions.decidedAt,
      signatureId: signatures.id,
      signer: signatures.printedName,
      signerRole: signatures.role,
      meaning: signatures.meaning,
      signedAt: signatures.signedAt,
      recordSha256: signatures.recordSha256,
      certificateId: certificates.id,
      certificateNumber: certificates.number
    })
    .from(dispositions)
    .innerJoin(signatures, eq(signatures.id, dispositions.signatureId))
    .leftJoin(certificates, eq(certificates.dispositionId, dispositions.id))
    .where(eq(dispositions.lotId, lotId))
    .orderBy(asc(dispositions.decidedAt));
}

/** A paper with its bytes, when it belongs to a lot of the site. */
export async function getPaper(db: Executor, siteId: string, paperId: string) {
  const [row] = await db
    .select({ paper: lotPapers, file: rawFiles, lot: lots })
    .from(lotPapers)
    .innerJoin(rawFiles, eq(rawFiles.id, lotPapers.rawFileId))
    .innerJoin(lots, eq(lots.id, lotPapers.lotId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .where(and(eq(lotPapers.id, paperId), eq(deliveries.siteId, siteId)));
  return row ?? null;
}

/** How the lot stands against the conditions of release, for this signer. */
export async function getReleaseConditions(
  db: Executor,
  detail: LotDetail,
  signerId: string,
  timeZone: string
): Promise<readonly ReleaseCondition[]> {
  const planned = detail.containers.filter((row) => row.inPlan === 'yes');
  const [version] = detail.lot.methodVersionId
    ? await db
        .select({ status: methodVersions.status })
        .from(methodVersions)
        .where(eq(methodVersions.id, detail.lot.methodVersionId))
    : [];
  const [{ waiting }] = await db
    .select({ waiting: count() })
    .from(repeatRequests)
    .innerJoin(containers, eq(containers.id, repeatRequests.containerId))
    .where(and(eq(containers.lotId, detail.lot.id), sql`${repeatRequests.outcome} is null`));
  return releaseConditions({
    status: detail.lot.status,
    containersPlanned: planned.length,
    containersPassed: planned.filter((row) => row.status === 'pass').length,
    containersBlocked: detail.containers
      .filter((row) => !['pass', 'awaiting'].includes(row.status))
      .map((row) => row.number),
    withoutCheck: detail.scans
      .filter((scan) => scan.verdict === 'pass' && scan.checkState !== 'valid')
      .map((scan) => scan.containerNumber),
    papers: detail.papers.filter((paper) => paper.kind === 'certificate_of_analysis').length,
    openDeviations: detail.deviations.filter((row) => row.phase !== 'closed').map((row) => row.number),
    openRepeats: waiting,
    highRisk: detail.material.degEgHighRisk,
    limitTest: detail.limitTests[0]?.outcome ?? null,
    expiresOn: detail.lot.expiresOn,
    today: await siteToday(db, timeZone),
    methodWithdrawn: version?.status === 'withdrawn',
    scannedByIds: detail.scans.map((scan: ScanSummary) => scan.operatorId),
    signerId
  });
}

/** Lots that wait to be scanned, with how many containers are left. */
export async function listLotsToScan(db: Executor, siteId: string) {
  return db
    .select(lotColumns)
    .from(lots)
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(deliveries, eq(deliveries.id, lots.deliveryId))
    .where(
      and(
        eq(deliveries.siteId, siteId),
        inArray(lots.status, ['quarantine', 'held']),
        ne(materials.ramanSuitability, 'no_first_order_spectrum')
      )
    )
    .orderBy(asc(lots.createdAt));
}

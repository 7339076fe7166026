import { and, asc, desc, eq, inArray, isNull } from 'drizzle-orm';
import type { Decision } from '../../identity/decision';
import type { Executor } from '../db/client';
import {
  containers,
  decisions,
  instruments,
  lots,
  materials,
  rawFiles,
  repeatRequests,
  scans
} from '../db/schema';

export interface ScanSummary {
  readonly id: string;
  readonly containerId: string;
  readonly containerNumber: number;
  readonly attempt: number;
  readonly verdict: Decision['verdict'];
  readonly nearLimit: boolean;
  readonly correlation: number | null;
  readonly hotellingT2: number | null;
  readonly t2Limit: number | null;
  readonly qResidual: number | null;
  readonly qLimit: number | null;
  readonly checkState: string;
  readonly instrument: string;
  readonly operatorName: string;
  readonly operatorId: string;
  readonly repeatReason: string | null;
  readonly recordedAt: Date;
}

/** Every scan of a lot, each attempt, in order of container and attempt. */
export async function listScans(db: Executor, lotId: string): Promise<ScanSummary[]> {
  return db
    .select({
      id: scans.id,
      containerId: scans.containerId,
      containerNumber: containers.number,
      attempt: scans.attempt,
      verdict: decisions.verdict,
      nearLimit: decisions.nearLimit,
      correlation: decisions.correlation,
      hotellingT2: decisions.hotellingT2,
      t2Limit: decisions.t2Limit,
      qResidual: decisions.qResidual,
      qLimit: decisions.qLimit,
      checkState: decisions.checkState,
      instrument: instruments.name,
      operatorName: scans.operatorName,
      operatorId: scans.operatorId,
      repeatReason: scans.repeatReason,
      recordedAt: scans.recordedAt
    })
    .from(scans)
    .innerJoin(decisions, eq(decisions.scanId, scans.id))
    .innerJoin(containers, eq(containers.id, scans.containerId))
    .innerJoin(instruments, eq(instruments.id, scans.instrumentId))
    .where(eq(scans.lotId, lotId))
    .orderBy(asc(containers.number), asc(scans.attempt));
}

/** Verdicts of a container so far, oldest first. */
export async function listVerdicts(db: Executor, containerId: string) {
  const rows = await db
    .select({ verdict: decisions.verdict })
    .from(scans)
    .innerJoin(decisions, eq(decisions.scanId, scans.id))
    .where(eq(scans.containerId, containerId))
    .orderBy(asc(scans.attempt));
  return rows.map((row) => row.verdict);
}

/** The granted, unused repeat of a container, or null. */
export async function findOpenGrant(db: Executor, containerId: string) {
  const [row] = await db
    .select()
    .from(repeatRequests)
    .where(
      and(
        eq(repeatRequests.containerId, containerId),
        eq(repeatRequests.outcome, 'granted'),
        isNull(repeatRequests.usedByScanId)
      )
    )
    .limit(1);
  return row ?? null;
}

/** The decision as stored: parsed from its canonical bytes. */
export const parseDecision = (result: Uint8Array): Decision =>
  JSON.parse(new TextDecoder().decode(result)) as Decision;

/** A scan with everything its evidence page shows. */
export async function getScan(db: Executor, id: string) {
  const [row] = await db
    .select({
      scan: scans,
      decision: decisions,
      container: containers,
      lot: lots,
      material: materials,
      instrument: instruments,
      file: { id: rawFiles.id, sha256: rawFiles.sha256, size: rawFiles.size, fileName: rawFiles.fileName }
    })
    .from(scans)
    .innerJoin(decisions, eq(decisions.scanId, scans.id))
    .innerJoin(containers, eq(containers.id, scans.containerId))
    .innerJoin(lots, eq(lots.id, scans.lotId))
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .innerJoin(instruments, eq(instruments.id, scans.instrumentId))
    .innerJoin(rawFiles, eq(rawFiles.id, scans.rawFileId))
    .where(eq(scans.id, id));
  return row ?? null;
}

/** Stored bytes of a file. */
export async function getRawFile(db: Executor, id: string) {
  const [row] = await db.select().from(rawFiles).where(eq(rawFiles.id, id));
  return row ?? null;
}

/** Newest scan ids of several containers, for the map of a lot. */
export async function listRepeatRequests(db: Executor, lotId: string) {
  return db
    .select({ request: repeatRequests, containerNumber: containers.number })
    .from(repeatRequests)
    .innerJoin(containers, eq(containers.id, repeatRequests.containerId))
    .where(eq(containers.lotId, lotId))
    .orderBy(desc(repeatRequests.requestedAt));
}

/** Requests that wait for an approver, over all lots. */
export async function listWaitingRepeatRequests(db: Executor) {
  return db
    .select({ request: repeatRequests, container: containers, lot: lots, material: materials })
    .from(repeatRequests)
    .innerJoin(containers, eq(containers.id, repeatRequests.containerId))
    .innerJoin(lots, eq(lots.id, containers.lotId))
    .innerJoin(materials, eq(materials.id, lots.materialId))
    .where(isNull(repeatRequests.outcome))
    .orderBy(asc(repeatRequests.requestedAt));
}

/** Raw bytes of several scans, for plots on a certificate. */
export async function listRawFilesOfScans(db: Executor, scanIds: string[]) {
  if (scanIds.length === 0) return [];
  return db
    .select({ scanId: scans.id, bytes: rawFiles.bytes, readOptions: scans.readOptions, decision: decisions })
    .from(scans)
    .innerJoin(rawFiles, eq(rawFiles.id, scans.rawFileId))
    .innerJoin(decisions, eq(decisions.scanId, scans.id))
    .where(inArray(scans.id, scanIds));
}

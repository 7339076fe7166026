import { eq } from 'drizzle-orm';
import { decide } from '../../identity/decide';
import type { Decision } from '../../identity/decision';
import { readSpectrumFile } from '../../spectra/formats/formats';
import { barcodeFault, normaliseBarcode } from '../../domain/barcodes';
import { done, refuse, type Outcome, type Refusal } from '../../domain/refusals';
import { can } from '../../domain/roles';
import { scanRefusal, statusAfter, VERDICT_NAMES, type NewScan } from '../../domain/scans';
import type { Database, Transaction } from '../db/client';
import { containers, instrumentLog, lots, repeatRequests, scans, sites } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { openDeviation } from '../platform/deviations';
import { mailOfFail, mailOfReadyLot } from '../platform/lotMails';
import { keepRawFile, sha256Hex, type IncomingFile } from '../platform/rawFiles';
import { refuseFile } from '../platform/refusedFile';
import { storeDecision } from '../platform/storeDecision';
import { recordTrail } from '../platform/trail';
import { listContainers, lockContainerByBarcode } from '../queries/containers';
import { getInstrument, type InstrumentStanding } from '../queries/instruments';
import { loadCurrentLibrary } from '../queries/library';
import { getEffectiveVersionId, getStoredMethod, type StoredMethod } from '../queries/methods';
import { findOpenGrant, getScan, listVerdicts, parseDecision } from '../queries/scans';

export interface RecordedScan {
  readonly scanId: string;
  readonly containerNumber: number;
  readonly lotId: string;
  readonly attempt: number;
  readonly decision: Decision;
  /** True when the same scan had been recorded before and nothing new was written. */
  readonly repeated: boolean;
}

type Locked = NonNullable<Awaited<ReturnType<typeof lockContainerByBarcode>>>;

/**
 * Records one scan: raw bytes, scan, decision, container status and trail in one transaction, so that no part
 * is ever on record without the others. Idempotent by the client-made scan id.
 */
export async function recordScan(
  db: Database,
  act: Act,
  input: NewScan,
  file: IncomingFile
): Promise<Outcome<RecordedScan>> {
  if (!can(act.actor, 'scan.record')) return refuse('not-allowed', 'Scanning containers is for operators.');
  const barcode = normaliseBarcode(input.barcode);
  const fault = barcodeFault(barcode);
  if (fault) return refuse('bad-input', fault, { barcode: fault });
  const read = readSpectrumFile(file.bytes, input.readOptions);
  if (!read.ok) return refuseFile(db, act, barcode, file, read.problem);

  return transact(db, async (tx) => {
    // The lock first: the same scan sent twice at once then finds the one that came before it.
    const locked = await lockContainerByBarcode(tx, barcode);
    const earlier = await sameScanBefore(tx, act, input.scanId, barcode, file);
    if (earlier) return earlier;
    const refusal = await whyNotNow(tx, act, input, locked);
    if (refusal) return refusal;
    const target = locked as Locked;
    const standing = await getInstrument(tx, input.instrumentId);
    if (!standing || standing.instrument.siteId !== act.actor.siteId)
      return refuse('bad-input', 'Choose an instrument of this site.', {
        instrumentId: 'Choose an instrument of this site'
      });
    if (standing.instrument.status !== 'in_service')
      return refuse('wrong-state', `${standing.instrument.name} is out of service. Use another instrument.`);
    const method = await methodFor(tx, target);
    if (!method)
      return refuse(
        'wrong-state',
        `There is no effective method for ${target.material.name}. Set the goods aside and call the method owner.`
      );
    return done(await writeScan(tx, act, input, file, target, standing, method));
  });
}

/** The answer already given for this scan id, or a refusal when the id came with other content. */
async function sameScanBefore(
  tx: Transaction,
  act: Act,
  scanId: string,
  barcode: string,
  file: IncomingFile
): Promise<Outcome<RecordedScan> | null> {
  const before = await getScan(tx, scanId);
  if (!before) return null;
  const same =
    before.file.sha256 === sha256Hex(file.bytes) &&
    before.container.barcode === barcode &&
    before.scan.operatorId === act.actor.id;
  if (!same)
    return refuse(
      'key-reused',
      'This scan id is on record with another file, container or person. Nothing was changed.'
    );
  return done({
    scanId,
    containerNumber: before.container.number,
    lotId: before.lot.id,
    attempt: before.scan.attempt,
    decision: parseDecision(before.decision.result),
    repeated: true
  });
}

async function whyNotNow(
  tx: Transaction,
  act: Act,
  input: NewScan,
  locked: Locked | null
): Promise<Refusal | null> {
  if (!locked)
    return refuse('not-found', 'No container has this code. Check that the label is one of ours.', {
      barcode: 'No container has this code'
    });
  const { container, lot, material } = locked;
  if (input.lotId !== undefined && lot.id !== input.lotId) {
    await recordTrail(tx, act, {
      action: 'scan.wrong-lot',
      recordType: 'container',
      recordId: container.id,
      recordLabel: `Container ${container.number} of lot ${lot.lotNumber}`,
      lotId: lot.id,
      after: { openLot: input.lotId }
    });
    const sentence = `This container belongs to lot ${lot.lotNumber} (${material.name}), not to the lot in the bay. Nothing was scanned.`;
    return refuse('wrong-state', sentence, { barcode: sentence });
  }
  if (lot.status === 'released' || lot.status === 'rejected')
    return refuse('wrong-state', `Lot ${lot.lotNumber} is ${lot.status} already.`);
  const [site] = await tx.select().from(sites).where(eq(sites.id, act.actor.siteId));
  const grant = await findOpenGrant(tx, container.id);
  const sentence = scanRefusal({
    status: container.status,
    verdicts: await listVerdicts(tx, container.id),
    grantOpen: grant !== null,
    invalidLimit: site.invalidRepeatLimit,
    repeatReason: input.repeatReason
  });
  return sentence === null ? null : refuse('wrong-state', sentence, { barcode: sentence });
}

/** The version the lot began with; a newer one never cuts in mid-lot. */
async function methodFor(tx: Transaction, target: Locked): Promise<StoredMethod | null> {
  const id = target.lot.methodVersionId ?? (await getEffectiveVersionId(tx, target.material.id));
  return id === null ? null : getStoredMethod(tx, id);
}

async function writeScan(
  tx: Transaction,
  act: Act,
  input: NewScan,
  file: IncomingFile,
  target: Locked,
  standing: InstrumentStanding,
  method: StoredMethod
): Promise<RecordedScan> {
  const { container, lot, material } = target;
  const current = await loadCurrentLibrary(tx);
  if (!current) throw new Error('a method is effective but there is no library');
  const checkState =
    standing.state === 'valid' ? 'valid' : standing.state === 'expired' ? 'expired' : 'missing';
  const check = standing.lastCheck;
  const correction =
    checkState === 'valid' && check && check.axisShiftCm1 !== null && check.axisScale !== null
      ? { shiftCm1: check.axisShiftCm1, scale: check.axisScale }
      : null;
  const raw = await keepRawFile(tx, file);
  const decision = decide({
    bytes: file.bytes,
    readOptions: input.readOptions,
    method: method.fitted,
    methodSha256: method.sha256,
    library: current.library,
    materialId: material.id,
    rawSha256: raw.sha256,
    instrument: { excitationNm: standing.instrument.excitationNm },
    check: { state: checkState, correction }
  });
  const verdicts = await listVerdicts(tx, container.id);
  const grant = await findOpenGrant(tx, container.id);
  const attempt = verdicts.length + 1;
  await tx.insert(scans).values({
    id: input.scanId,
    lotId: lot.id,
    containerId: container.id,
    attempt,
    instrumentId: standing.instrument.id,
    performanceCheckId: checkState === 'missing' ? null : (check?.id ?? null),
    methodVersionId: method.versionId,
    rawFileId: raw.id,
    readOptions: input.readOptions,
    acquisition: { ...readAcquisition(file, input) },
    repeatReason: attempt === 1 ? null : input.repeatReason,
    repeatGrantId: grant?.id ?? null,
    operatorId: act.actor.id,
    operatorName: act.actor.printedName,
    clientTime: input.clientTime === undefined ? null : new Date(input.clientTime),
    sentLate: input.sentLate
  });
  const decisionHash = await storeDecision(tx, input.scanId, decision, current.id, checkState, correction);
  if (grant)
    await tx
      .update(repeatRequests)
      .set({ usedByScanId: input.scanId })
      .where(eq(repeatRequests.id, grant.id));
  await recordTrail(tx, act, {
    action: 'scan.record',
    recordType: 'scan',
    recordId: input.scanId,
    recordLabel: `Scan ${attempt} of container ${container.number}, lot ${lot.lotNumber}`,
    lotId: lot.id,
    before: { containerStatus: container.status },
    after: {
      verdict: VERDICT_NAMES[decision.verdict],
      reason: decision.explanation.reason,
      instrument: standing.instrument.name,
      method: `${method.code} version ${method.version}`,
      fileName: file.fileName.slice(0, 255),
      fileSha256: raw.sha256,
      decisionSha256: decisionHash,
      clientTime: input.clientTime ?? null
    },
    reason: attempt === 1 ? undefined : input.repeatReason
  });
  await afterScan(
    tx,
    act,
    input,
    target,
    standing,
    decision,
    verdicts.filter((verdict) => verdict === 'invalid').length,
    method
  );
  return {
    scanId: input.scanId,
    containerNumber: container.number,
    lotId: lot.id,
    attempt,
    decision,
    repeated: false
  };
}

function readAcquisition(file: IncomingFile, input: NewScan) {
  const read = readSpectrumFile(file.bytes, input.readOptions);
  return read.ok ? read.acquisition : {};
}

/** What a verdict does to the container and its lot: lock, deviation, review. */
async function afterScan(
  tx: Transaction,
  act: Act,
  input: NewScan,
  target: Locked,
  standing: InstrumentStanding,
  decision: Decision,
  invalidBefore: number,
  method: StoredMethod
): Promise<void> {
  const { container, lot, material } = target;
  const [site] = await tx.select().from(sites).where(eq(sites.id, act.actor.siteId));
  const invalidSoFar = invalidBefore + (decision.verdict === 'invalid' ? 1 : 0);
  const status = statusAfter(decision.verdict, invalidSoFar, site.invalidRepeatLimit);
  await tx.update(containers).set({ status }).where(eq(containers.id, container.id));
  await tx.insert(instrumentLog).values({
    instrumentId: standing.instrument.id,
    kind: 'use',
    entry: `Scanned container ${container.number} of lot ${lot.lotNumber}: ${VERDICT_NAMES[decision.verdict]}.`,
    byUserId: act.actor.id,
    byName: act.actor.printedName
  });
  if (decision.verdict === 'fail') {
    await openDeviation(tx, act, {
      title: `Container ${container.number} of lot ${lot.lotNumber} failed its identity test`,
      origin: 'fail',
      description: `${material.name}: ${decision.explanation.reason}`,
      lotId: lot.id,
      containerId: container.id,
      scanId: input.scanId
    });
    await mailOfFail(tx, act.actor.siteId, lot);
  }
  const all = await listContainers(tx, lot.id);
  const complete = all.every((row) => (row.id === container.id ? status : row.status) === 'pass');
  if (complete) await mailOfReadyLot(tx, act.actor.siteId, lot);
  await tx
    .update(lots)
    .set({
      methodVersionId: lot.methodVersionId ?? method.versionId,
      status: lot.status === 'quarantine' && complete ? 'under_review' : lot.status
    })
    .where(eq(lots.id, lot.id));
}

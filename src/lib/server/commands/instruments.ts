import { eq, sql } from 'drizzle-orm';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import { judgeCheck, type CheckResult } from '../../domain/performanceChecks';
import { readSpectrumFile } from '../../spectra/formats/formats';
import type { Database } from '../db/client';
import { instrumentLog, instruments, performanceChecks, sites, toleranceSets } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { keepRawFile, type IncomingFile } from '../platform/rawFiles';
import { recordTrail } from '../platform/trail';
import { getInstrument } from '../queries/instruments';

export interface NewCheck {
  readonly instrumentId: string;
  readonly toleranceSetId: string;
  readonly standardLot: string;
}

/**
 * Records a performance check: the standard's spectrum, the bands found, and pass or fail. Kept whatever its
 * outcome; a pass is valid for the site's set time.
 */
export async function recordPerformanceCheck(
  db: Database,
  act: Act,
  input: NewCheck,
  file: IncomingFile
): Promise<Outcome<{ id: string; result: CheckResult }>> {
  if (!can(act.actor, 'instrument.check'))
    return refuse('not-allowed', 'Checking instruments is for operators and method owners.');
  const read = readSpectrumFile(file.bytes, {});
  if (!read.ok) return refuse('bad-file', read.problem.message, { file: read.problem.message });
  return transact(db, async (tx) => {
    const standing = await getInstrument(tx, input.instrumentId);
    if (!standing || standing.instrument.siteId !== act.actor.siteId)
      return refuse('not-found', 'There is no such instrument.');
    if (standing.instrument.status !== 'in_service')
      return refuse('wrong-state', `${standing.instrument.name} is out of service.`);
    const [tolerances] = await tx
      .select()
      .from(toleranceSets)
      .where(eq(toleranceSets.id, input.toleranceSetId));
    if (!tolerances)
      return refuse('bad-input', 'Choose the standard.', { toleranceSetId: 'Choose the standard' });
    const judged = judgeCheck(read, standing.instrument, tolerances);
    if (!judged.ok) return refuse('bad-file', judged.sentence, { file: judged.sentence });
    const { result } = judged;
    const [site] = await tx.select().from(sites).where(eq(sites.id, act.actor.siteId));
    const raw = await keepRawFile(tx, file);
    const [row] = await tx
      .insert(performanceChecks)
      .values({
        instrumentId: standing.instrument.id,
        standard: tolerances.standard,
        standardLot: input.standardLot.slice(0, 80),
        toleranceSetId: tolerances.id,
        rawFileId: raw.id,
        result: { ...result },
        axisShiftCm1: result.correction?.shiftCm1 ?? null,
        axisScale: result.correction?.scale ?? null,
        passed: result.passed,
        performedBy: act.actor.id,
        performedByName: act.actor.printedName,
        validUntil: result.passed
          ? sql`clock_timestamp() + make_interval(hours => ${site.checkValidHours})`
          : null
      })
      .returning({ id: performanceChecks.id });
    const outcome = result.passed ? 'passed' : 'failed';
    await tx.insert(instrumentLog).values({
      instrumentId: standing.instrument.id,
      kind: 'check',
      entry: `Performance check with ${tolerances.standard} ${outcome}: ${result.sentence}`,
      byUserId: act.actor.id,
      byName: act.actor.printedName
    });
    await recordTrail(tx, act, {
      action: 'instrument.check',
      recordType: 'instrument',
      recordId: standing.instrument.id,
      recordLabel: `Instrument ${standing.instrument.name}`,
      after: {
        check: row.id,
        standard: tolerances.standard,
        outcome,
        sentence: result.sentence,
        fileSha256: raw.sha256
      }
    });
    return done({ id: row.id, result });
  });
}

/** Takes an instrument out of service, with a reason. */
export async function takeOutOfService(
  db: Database,
  act: Act,
  instrumentId: string,
  reason: string
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'instrument.take-out'))
    return refuse('not-allowed', 'Your role does not take instruments out of service.');
  if (reason.trim().length < 3)
    return refuse('bad-input', 'Say why in a few words.', { reason: 'Say why in a few words' });
  return transact(db, async (tx) => {
    const standing = await getInstrument(tx, instrumentId);
    if (!standing || standing.instrument.siteId !== act.actor.siteId)
      return refuse('not-found', 'There is no such instrument.');
    if (standing.instrument.status === 'out_of_service')
      return refuse('wrong-state', `${standing.instrument.name} is out of service already.`);
    await tx.update(instruments).set({ status: 'out_of_service' }).where(eq(instruments.id, instrumentId));
    await tx.insert(instrumentLog).values({
      instrumentId,
      kind: 'out_of_service',
      entry: reason.trim(),
      byUserId: act.actor.id,
      byName: act.actor.printedName
    });
    await recordTrail(tx, act, {
      action: 'instrument.take-out',
      recordType: 'instrument',
      recordId: instrumentId,
      recordLabel: `Instrument ${standing.instrument.name}`,
      before: { status: 'in_service' },
      after: { status: 'out_of_service' },
      reason: reason.trim()
    });
    return done({ id: instrumentId });
  });
}

import type { DecideRequest } from '../../identity/decide';
import type { Executor } from '../db/client';
import { eq } from 'drizzle-orm';
import { libraries } from '../db/schema';
import { loadLibrary } from './library';
import { getStoredMethod } from './methods';
import { getRawFile, getScan } from './scans';

/** Everything a stored scan was decided from, gathered again from the record alone. */
export async function loadDecisionInputs(
  db: Executor,
  scanId: string
): Promise<{ request: DecideRequest; storedSha256: string; storedEngine: string } | null> {
  const found = await getScan(db, scanId);
  if (!found) return null;
  const file = await getRawFile(db, found.file.id);
  const method = await getStoredMethod(db, found.scan.methodVersionId);
  const [library] = await db
    .select({ sha256: libraries.sha256 })
    .from(libraries)
    .where(eq(libraries.id, found.decision.libraryId));
  if (!file || !method || !library) throw new Error(`scan ${scanId} has lost part of its record`);
  const { axisShiftCm1, axisScale, checkState } = found.decision;
  return {
    storedSha256: found.decision.resultSha256,
    storedEngine: found.decision.engineVersion,
    request: {
      bytes: file.bytes,
      readOptions: found.scan.readOptions,
      method: method.fitted,
      methodSha256: method.sha256,
      library: await loadLibrary(db, found.decision.libraryId, library.sha256),
      materialId: found.material.id,
      rawSha256: file.sha256,
      instrument: { excitationNm: found.instrument.excitationNm },
      check: {
        state: checkState,
        correction:
          axisShiftCm1 === null || axisScale === null ? null : { shiftCm1: axisShiftCm1, scale: axisScale }
      }
    }
  };
}

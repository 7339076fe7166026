import { canonicalJson } from '../../identity/canonicalJson';
import type { Decision } from '../../identity/decision';
import type { Transaction } from '../db/client';
import { decisions } from '../db/schema';
import { sha256Hex } from './rawFiles';

/** Stores a decision in its canonical form with its hash, in the scan's transaction; gives the hash. */
export async function storeDecision(
  tx: Transaction,
  scanId: string,
  decision: Decision,
  libraryId: string,
  checkState: 'valid' | 'missing' | 'expired',
  correction: { shiftCm1: number; scale: number } | null
): Promise<string> {
  const result = new TextEncoder().encode(canonicalJson(decision));
  const resultSha256 = sha256Hex(result);
  const scores = decision.scores;
  await tx.insert(decisions).values({
    scanId,
    verdict: decision.verdict,
    nearLimit: decision.nearLimit,
    engineVersion: decision.engineVersion,
    libraryId,
    checkState,
    axisShiftCm1: correction?.shiftCm1 ?? null,
    axisScale: correction?.scale ?? null,
    correlation: scores?.correlation ?? null,
    hotellingT2: scores?.hotellingT2 ?? null,
    t2Limit: scores?.t2Limit ?? null,
    qResidual: scores?.qResidual ?? null,
    qLimit: scores?.qLimit ?? null,
    bestRivalCorrelation: scores?.bestRivalCorrelation ?? null,
    signalToNoise: scores?.signalToNoise ?? null,
    result,
    resultSha256
  });
  return resultSha256;
}

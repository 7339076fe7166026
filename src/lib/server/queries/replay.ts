import { createHash } from 'node:crypto';
import { canonicalJson } from '../../identity/canonicalJson';
import { decide } from '../../identity/decide';
import { ENGINE_VERSION } from '../../identity/engineVersion';
import type { Executor } from '../db/client';
import { loadDecisionInputs } from './decisionInputs';

export interface Replay {
  readonly identical: boolean;
  readonly storedSha256: string;
  readonly replayedSha256: string;
  readonly storedEngine: string;
  readonly engine: string;
}

/** Decides a stored scan again from its record alone and compares the result bit for bit. */
export async function replayScan(db: Executor, scanId: string): Promise<Replay | null> {
  const inputs = await loadDecisionInputs(db, scanId);
  if (!inputs) return null;
  const again = canonicalJson(decide(inputs.request));
  const replayedSha256 = createHash('sha256').update(again).digest('hex');
  return {
    identical: replayedSha256 === inputs.storedSha256,
    storedSha256: inputs.storedSha256,
    replayedSha256,
    storedEngine: inputs.storedEngine,
    engine: ENGINE_VERSION
  };
}

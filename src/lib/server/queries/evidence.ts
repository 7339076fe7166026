import { evidenceOf, type EvidenceView } from '../../identity/evidence';
import { can, type Actor } from '../../domain/roles';
import type { Executor } from '../db/client';
import { loadDecisionInputs } from './decisionInputs';

/**
 * The plot of a scan over its references: computed from the stored bytes whenever it is shown. A person who
 * may not learn of rivals gets no markers beyond the claimed material's own bands.
 */
export async function evidenceForActor(
  db: Executor,
  actor: Pick<Actor, 'roles'>,
  scanId: string
): Promise<EvidenceView | null> {
  const inputs = await loadDecisionInputs(db, scanId);
  if (!inputs) return null;
  const view = evidenceOf(inputs.request);
  if (view === null || can(actor, 'scan.read-rivals')) return view;
  return { ...view, rival: null };
}

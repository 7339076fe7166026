import { deviations } from '../db/schema';
import type { Transaction } from '../db/client';
import type { Act } from './act';
import { nextNumber } from './numberSeries';
import { recordTrail } from './trail';

export interface NewDeviation {
  readonly title: string;
  readonly origin: (typeof deviations.$inferInsert)['origin'];
  readonly description: string;
  readonly lotId?: string;
  readonly containerId?: string;
  readonly scanId?: string;
}

/** Opens a deviation in the caller's transaction; several nouns' commands do so (a fail, a withdrawn method …). */
export async function openDeviation(
  tx: Transaction,
  act: Act,
  input: NewDeviation
): Promise<{ id: string; number: string }> {
  const number = await nextNumber(tx, 'DEV');
  const [row] = await tx
    .insert(deviations)
    .values({ number, ...input, openedBy: act.actor.id, openedByName: act.actor.printedName })
    .returning({ id: deviations.id });
  await recordTrail(tx, act, {
    action: 'deviation.open',
    recordType: 'deviation',
    recordId: row.id,
    recordLabel: `Deviation ${number}`,
    lotId: input.lotId,
    after: { number, ...input, phase: 'assess' }
  });
  return { id: row.id, number };
}

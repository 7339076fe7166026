import { eq } from 'drizzle-orm';
import { CAUSE_CATEGORIES, type CauseCategory, type DeviationPhase } from '../../domain/deviations';
import { done, refuse, type Outcome } from '../../domain/refusals';
import { can } from '../../domain/roles';
import type { Database } from '../db/client';
import { deviationNotes, deviations } from '../db/schema';
import { transact } from '../db/transaction';
import type { Act } from '../platform/act';
import { openDeviation } from '../platform/deviations';
import { proveIdentity, sign } from '../platform/signing';
import { recordTrail } from '../platform/trail';
import { getDeviation } from '../queries/deviations';

/** Opens a deviation by hand. */
export async function openDeviationByHand(
  db: Database,
  act: Act,
  input: { title: string; description: string; lotId?: string }
): Promise<Outcome<{ id: string; number: string }>> {
  if (!can(act.actor, 'deviation.open')) return refuse('not-allowed', 'Your role does not open deviations.');
  if (input.title.trim().length < 3)
    return refuse('bad-input', 'Say what happened in a few words.', {
      title: 'Say what happened in a few words'
    });
  return transact(db, async (tx) =>
    done(
      await openDeviation(tx, act, {
        title: input.title.trim().slice(0, 200),
        description: input.description.trim(),
        origin: 'by_hand',
        lotId: input.lotId
      })
    )
  );
}

/** Adds a note to a deviation; the first one starts the investigation. */
export async function addDeviationNote(
  db: Database,
  act: Act,
  id: string,
  note: string
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'deviation.work'))
    return refuse('not-allowed', 'Working on deviations is for method owners and approvers.');
  if (note.trim().length < 3)
    return refuse('bad-input', 'Write what was found.', { note: 'Write what was found' });
  return transact(db, async (tx) => {
    const [row] = await tx.select().from(deviations).where(eq(deviations.id, id)).for('update');
    if (!row) return refuse('not-found', 'There is no such deviation.');
    if (row.phase === 'closed') return refuse('wrong-state', 'The deviation is closed.');
    await tx
      .insert(deviationNotes)
      .values({ deviationId: id, note: note.trim(), byUserId: act.actor.id, byName: act.actor.printedName });
    const phase: DeviationPhase = row.phase === 'assess' ? 'investigate' : row.phase;
    await tx.update(deviations).set({ phase }).where(eq(deviations.id, id));
    await recordTrail(tx, act, {
      action: 'deviation.note',
      recordType: 'deviation',
      recordId: id,
      recordLabel: `Deviation ${row.number}`,
      lotId: row.lotId ?? undefined,
      before: { phase: row.phase },
      after: { phase, note: note.trim() }
    });
    return done({ id });
  });
}

export interface Conclusion {
  readonly id: string;
  readonly causeCategory: string;
  readonly cause: string;
  readonly impact: string;
  readonly action: string;
  readonly password: string;
  readonly oneTimeCode?: string;
}

/** Concludes a deviation under an approver's signature: cause, impact and action are all needed. */
export async function concludeDeviation(
  db: Database,
  act: Act,
  input: Conclusion
): Promise<Outcome<{ id: string }>> {
  if (!can(act.actor, 'deviation.close'))
    return refuse('not-allowed', 'Concluding deviations is for QA approvers.');
  const category = CAUSE_CATEGORIES.find((name): name is CauseCategory => name === input.causeCategory);
  const fields: Record<string, string> = {};
  if (!category) fields.causeCategory = 'Choose the kind of cause';
  for (const name of ['cause', 'impact', 'action'] as const) {
    if (input[name].trim().length < 3) fields[name] = `Describe the ${name} in a few words`;
  }
  if (!category || Object.keys(fields).length > 0)
    return refuse('bad-input', Object.values(fields)[0], fields);
  const proof = await proveIdentity(db, act, {
    password: input.password,
    oneTimeCode: input.oneTimeCode,
    action: 'deviation.close'
  });
  if (!proof.ok) return proof;
  return transact(db, async (tx) => {
    await tx.select({ id: deviations.id }).from(deviations).where(eq(deviations.id, input.id)).for('update');
    const found = await getDeviation(tx, input.id);
    if (!found) return refuse('not-found', 'There is no such deviation.');
    if (found.deviation.phase === 'closed') return refuse('wrong-state', 'The deviation is closed already.');
    if (found.deviation.openedBy === act.actor.id)
      return refuse('own-work', 'You opened this deviation, so another approver must conclude it.');
    const conclusion = {
      causeCategory: category,
      cause: input.cause.trim(),
      impact: input.impact.trim(),
      action: input.action.trim()
    };
    const signature = await sign(tx, act, proof.value, {
      meaning: 'approved',
      recordType: 'deviation',
      recordId: input.id,
      record: {
        type: 'deviation',
        number: found.deviation.number,
        title: found.deviation.title,
        ...conclusion
      },
      reason: conclusion.cause
    });
    await tx
      .update(deviations)
      .set({
        ...conclusion,
        phase: 'closed',
        closedAt: signature.signedAt,
        conclusionSignatureId: signature.id
      })
      .where(eq(deviations.id, input.id));
    await recordTrail(tx, act, {
      action: 'deviation.close',
      recordType: 'deviation',
      recordId: input.id,
      recordLabel: `Deviation ${found.deviation.number}`,
      lotId: found.deviation.lotId ?? undefined,
      before: { phase: found.deviation.phase },
      after: { phase: 'closed', ...conclusion, signature: signature.id },
      reason: conclusion.cause
    });
    return done({ id: input.id });
  });
}

import { actingRole, PERMISSIONS, ROLE_NAMES, type Action } from '../../domain/roles';
import type { TrailAction } from '../../domain/trail';
import type { Executor } from '../db/client';
import { trailEntries } from '../db/schema';
import { accountId, type Act } from './act';

export interface NewTrailEntry {
  readonly action: TrailAction;
  /** Role under which it was done; otherwise the one that the action's permission gives. */
  readonly role?: string;
  readonly recordType: string;
  readonly recordId: string;
  /** How people name the record, e.g. `Lot L-2026-0007`. */
  readonly recordLabel: string;
  readonly lotId?: string | null;
  readonly before?: Record<string, unknown>;
  readonly after?: Record<string, unknown>;
  readonly reason?: string | null;
}

/**
 * Writes one entry of the audit trail, in the transaction of the change it tells of: either both are kept or
 * neither. Time, transaction, content and hash are the database's (its trigger sets them), and an entry
 * without a name is refused there. Returns the entry's number.
 */
export async function recordTrail(tx: Executor, act: Act, entry: NewTrailEntry): Promise<number> {
  const [row] = await tx
    .insert(trailEntries)
    .values({
      actorId: accountId(act),
      actorName: act.actor.printedName,
      actorRole: entry.role ?? roleOf(act, entry.action),
      action: entry.action,
      recordType: entry.recordType,
      recordId: entry.recordId,
      recordLabel: entry.recordLabel,
      lotId: entry.lotId ?? null,
      before: entry.before ?? null,
      after: entry.after ?? null,
      reason: entry.reason ?? null,
      requestId: act.requestId || null
    })
    .returning({ id: trailEntries.id });
  return row.id;
}

function roleOf(act: Act, action: string): string {
  if (accountId(act) === null) return 'system';
  const role = action in PERMISSIONS ? actingRole(act.actor, action as Action) : null;
  if (role) return ROLE_NAMES[role];
  return act.actor.roles.map((id) => ROLE_NAMES[id]).join(', ') || 'none';
}

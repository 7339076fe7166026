import { can } from '$lib/domain/roles';
import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { recordTrail } from '$lib/server/platform/trail';
import { verifyTrail } from '$lib/server/platform/verifyTrail';
import { getSealState, listTrail, listTrailActions, TRAIL_PAGE } from '$lib/server/queries/trail';
import type { Actions, PageServerLoad } from './$types';

const isDate = (value: string | null) =>
  value !== null && /^\d{4}-\d{2}-\d{2}$/.test(value) && !Number.isNaN(Date.parse(value));
const isUuid = (value: string | null) => value !== null && /^[0-9a-f-]{36}$/.test(value);

export const load: PageServerLoad = async ({ locals, url }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const get = (name: string) => url.searchParams.get(name)?.trim().slice(0, 200) || undefined;
  const filter = {
    who: get('who'),
    action: get('action'),
    record: get('record'),
    recordType: get('recordType'),
    recordId: get('recordId'),
    lotId: isUuid(url.searchParams.get('lot')) ? get('lot') : undefined,
    from: isDate(url.searchParams.get('from')) ? get('from') : undefined,
    to: isDate(url.searchParams.get('to')) ? get('to') : undefined,
    timeZone: actor.timeZone
  };
  const page = Math.max(1, Math.min(100_000, Number.parseInt(url.searchParams.get('page') ?? '1', 10) || 1));
  const { total, entries } = await listTrail(db, filter, page);
  return {
    filter,
    page,
    pageSize: TRAIL_PAGE,
    total,
    entries,
    actions: await listTrailActions(db),
    seal: await getSealState(db),
    mayVerify: can(actor, 'trail.verify')
  };
};

export const actions: Actions = {
  verify: async ({ locals }) => {
    const db = database();
    const verification = await verifyTrail(db);
    await recordTrail(db, requireAct(locals), {
      action: 'trail.verify',
      recordType: 'trail',
      recordId: String(verification.sealed),
      recordLabel: 'Audit trail',
      after: { ok: verification.ok, sentence: verification.sentence }
    });
    return { verification };
  }
};

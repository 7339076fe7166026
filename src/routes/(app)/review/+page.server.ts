import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { listLots } from '$lib/server/queries/lots';
import { listWaitingRepeatRequests } from '$lib/server/queries/scans';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
  const { actor } = requireAct(locals);
  const db = database();
  return {
    lots: await listLots(db, actor.siteId, ['quarantine', 'under_review', 'held']),
    repeats: await listWaitingRepeatRequests(db)
  };
};

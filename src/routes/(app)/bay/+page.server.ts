import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { listInstruments } from '$lib/server/queries/instruments';
import { listLotsToScan } from '$lib/server/queries/lots';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
  const { actor } = requireAct(locals);
  const db = database();
  return {
    lots: await listLotsToScan(db, actor.siteId),
    instruments: await listInstruments(db, actor.siteId)
  };
};

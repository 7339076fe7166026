import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { listLots } from '$lib/server/queries/lots';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => ({
  lots: await listLots(database(), requireAct(locals).actor.siteId)
});

import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { listInstruments } from '$lib/server/queries/instruments';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => ({
  instruments: await listInstruments(database(), requireAct(locals).actor.siteId)
});

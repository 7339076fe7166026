import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { listPeople } from '$lib/server/queries/people';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => ({
  people: await listPeople(database(), requireAct(locals).actor.siteId)
});

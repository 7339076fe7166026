import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { listTally } from '$lib/server/queries/tally';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
  const { actor } = requireAct(locals);
  return { lines: await listTally(database(), actor) };
};

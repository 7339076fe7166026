import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { listCertificates } from '$lib/server/queries/certificates';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => ({
  certificates: await listCertificates(database(), requireAct(locals).actor.siteId)
});

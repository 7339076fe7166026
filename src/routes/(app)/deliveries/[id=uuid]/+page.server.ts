import { can } from '$lib/domain/roles';
import { database } from '$lib/server/db/client';
import { notFound, requireAct } from '$lib/server/platform/respond';
import { getDelivery } from '$lib/server/queries/deliveries';
import { listLotsOfDelivery } from '$lib/server/queries/lots';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params, url }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const found = (await getDelivery(db, actor.siteId, params.id)) ?? notFound('delivery');
  return {
    ...found,
    lots: await listLotsOfDelivery(db, params.id),
    mayScan: can(actor, 'scan.record'),
    justRegistered: url.searchParams.has('new')
  };
};

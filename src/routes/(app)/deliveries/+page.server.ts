import { can } from '$lib/domain/roles';
import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { listDeliveries } from '$lib/server/queries/deliveries';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
  const { actor } = requireAct(locals);
  return {
    deliveries: await listDeliveries(database(), actor.siteId),
    mayRegister: can(actor, 'delivery.register')
  };
};

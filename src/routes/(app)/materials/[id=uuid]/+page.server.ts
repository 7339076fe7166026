import { whyNoMethod } from '$lib/domain/materials';
import { can } from '$lib/domain/roles';
import { database } from '$lib/server/db/client';
import { notFound, requireAct } from '$lib/server/platform/respond';
import { listApprovedSources, listVersionsOfMaterial } from '$lib/server/queries/materials';
import { getMaterial, listReferences } from '$lib/server/queries/references';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { actor } = requireAct(locals);
  const db = database();
  const material = (await getMaterial(db, params.id)) ?? notFound('material');
  return {
    material,
    barred: whyNoMethod(material),
    sources: await listApprovedSources(db, params.id),
    references: can(actor, 'reference.read') ? await listReferences(db, params.id) : null,
    versions: can(actor, 'method.read') ? await listVersionsOfMaterial(db, params.id) : null
  };
};

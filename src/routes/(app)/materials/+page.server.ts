import { database } from '$lib/server/db/client';
import { listMaterialOverview } from '$lib/server/queries/materials';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async () => ({ materials: await listMaterialOverview(database()) });

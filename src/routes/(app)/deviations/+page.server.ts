import { database } from '$lib/server/db/client';
import { listDeviations } from '$lib/server/queries/deviations';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async () => ({ deviations: await listDeviations(database()) });

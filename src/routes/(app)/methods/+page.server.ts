import { database } from '$lib/server/db/client';
import { listMethodVersions } from '$lib/server/queries/methods';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async () => ({ versions: await listMethodVersions(database()) });

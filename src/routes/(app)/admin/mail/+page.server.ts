import { database } from '$lib/server/db/client';
import { requireAct } from '$lib/server/platform/respond';
import { readCaughtMails } from '$lib/server/platform/mailFolder';
import { listMails } from '$lib/server/queries/people';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => ({
  mails: await listMails(database()),
  caught: requireAct(locals).actor.demo ? await readCaughtMails() : null
});

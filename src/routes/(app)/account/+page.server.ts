import { redirect } from '@sveltejs/kit';
import { changeOwnPassword } from '$lib/server/commands/passwords';
import { endOwnSession } from '$lib/server/commands/people';
import { database } from '$lib/server/db/client';
import { formFailure, requireAct, text } from '$lib/server/platform/respond';
import { getPerson, listSessions } from '$lib/server/queries/people';
import { listGrants } from '$lib/server/queries/roleGrants';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
  const { actor, sessionKey } = requireAct(locals);
  const db = database();
  const [account, grants, sessions] = await Promise.all([
    getPerson(db, actor.siteId, actor.id),
    listGrants(db, actor.id),
    listSessions(db, actor.id)
  ]);
  if (!account) throw new Error(`account ${actor.id} acts, but is not of its site`);
  return {
    account,
    grants,
    sessions: sessions.map((session) => ({
      key: session.tokenHash,
      createdAt: session.createdAt,
      lastSeenAt: session.lastSeenAt,
      address: session.address,
      userAgent: session.userAgent,
      current: session.tokenHash === sessionKey
    }))
  };
};

export const actions: Actions = {
  password: async ({ request, locals }) => {
    const form = await request.formData();
    const typed = (name: string) => String(form.get(name) ?? '').slice(0, 1000);
    const outcome = await changeOwnPassword(database(), requireAct(locals), {
      old: typed('old'),
      password: typed('password'),
      again: typed('again')
    });
    if (outcome.ok) return { changed: true, sessionsEnded: outcome.value.sessionsEnded };
    if (outcome.code === 'not-signed-in') redirect(303, '/signin');
    return formFailure(outcome);
  },
  endSession: async ({ request, locals }) => {
    const outcome = await endOwnSession(
      database(),
      requireAct(locals),
      text(await request.formData(), 'key')
    );
    if (!outcome.ok) return formFailure(outcome);
    if (outcome.value.current) redirect(303, '/signin');
    return { ended: true };
  }
};

import { decideRole } from '$lib/server/commands/roleGrants';
import { database } from '$lib/server/db/client';
import { formFailure, requireAct, text } from '$lib/server/platform/respond';
import { refuse } from '$lib/domain/refusals';
import { listWaitingRoles } from '$lib/server/queries/roleGrants';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
  const { actor } = requireAct(locals);
  const waiting = await listWaitingRoles(database(), actor.siteId);
  return {
    waiting: waiting.map((row) => ({
      ...row,
      /** Why another approver must decide it, or null. */
      notYours:
        row.userId === actor.id
          ? 'The role would be yours: another approver decides it.'
          : row.requestedBy === actor.id
            ? 'You asked for it: another approver decides it.'
            : null
    }))
  };
};

async function decide({ request, locals }: Parameters<Actions[string]>[0], outcome: 'granted' | 'declined') {
  const form = await request.formData();
  const values = { requestId: text(form, 'requestId'), reason: text(form, 'reason') };
  if (!/^[0-9a-f-]{36}$/.test(values.requestId))
    return formFailure(refuse('not-found', 'There is no such request.'), values);
  const decided = await decideRole(database(), requireAct(locals), {
    ...values,
    outcome,
    password: String(form.get('password') ?? ''),
    oneTimeCode: text(form, 'oneTimeCode') || undefined
  });
  return decided.ok ? { decided: outcome } : formFailure(decided, values);
}

export const actions: Actions = {
  grant: (event) => decide(event, 'granted'),
  decline: (event) => decide(event, 'declined')
};

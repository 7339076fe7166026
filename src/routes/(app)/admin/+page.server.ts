import { endSessions, setAccountStatus } from '$lib/server/commands/people';
import { refuse } from '$lib/domain/refusals';
import { database } from '$lib/server/db/client';
import { formFailure, requireAct, text } from '$lib/server/platform/respond';
import { listPeople } from '$lib/server/queries/people';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => ({
  people: await listPeople(database(), requireAct(locals).actor.siteId)
});

const isUuid = (value: string) => /^[0-9a-f-]{36}$/.test(value);

export const actions: Actions = {
  status: async ({ request, locals }) => {
    const form = await request.formData();
    const values = {
      userId: text(form, 'userId'),
      status: text(form, 'status'),
      reason: text(form, 'reason')
    };
    const { status } = values;
    if (!isUuid(values.userId) || (status !== 'active' && status !== 'suspended' && status !== 'left')) {
      return formFailure(refuse('bad-input', 'Choose the account and its new state.'), values);
    }
    const outcome = await setAccountStatus(
      database(),
      requireAct(locals),
      values.userId,
      status,
      values.reason
    );
    return outcome.ok ? { changed: values.userId } : formFailure(outcome, values);
  },
  endSessions: async ({ request, locals }) => {
    const userId = text(await request.formData(), 'userId');
    if (!isUuid(userId)) return formFailure(refuse('not-found', 'There is no such account.'));
    const outcome = await endSessions(database(), requireAct(locals), userId);
    return outcome.ok ? { ended: outcome.value.count } : formFailure(outcome);
  }
};

import { refuse } from '$lib/domain/refusals';
import { ROLE_IDS, type RoleId } from '$lib/domain/roles';
import { makePasswordLink } from '$lib/server/commands/passwords';
import { endSessions, setAccountStatus } from '$lib/server/commands/people';
import { endRole, requestRole } from '$lib/server/commands/roleGrants';
import { database } from '$lib/server/db/client';
import { passwordPath } from '$lib/server/platform/passwordLinks';
import { formFailure, notFound, requireAct, text } from '$lib/server/platform/respond';
import { getPerson } from '$lib/server/queries/people';
import { listGrants, listWaitingRoles } from '$lib/server/queries/roleGrants';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
  const { siteId } = requireAct(locals).actor;
  const db = database();
  const account = await getPerson(db, siteId, params.id);
  if (!account) notFound('account');
  return {
    account,
    grants: await listGrants(db, account.id),
    waiting: await listWaitingRoles(db, siteId, account.id)
  };
};

const asRole = (value: string): RoleId | undefined => ROLE_IDS.find((role) => role === value);

async function changeRole(
  { request, locals, params }: Parameters<Actions[string]>[0],
  form: 'requestRole' | 'endRole',
  command: typeof requestRole | typeof endRole
) {
  const data = await request.formData();
  const values = { form, role: text(data, 'role'), reason: text(data, 'reason') };
  const role = asRole(values.role);
  if (!role)
    return formFailure(refuse('bad-input', 'Nothing was changed.', { role: 'Choose the role' }), values);
  const { reason } = values;
  const outcome = await command(database(), requireAct(locals), {
    userId: params.id as string,
    role,
    reason
  });
  if (!outcome.ok) return formFailure(outcome, values);
  return { said: form === 'endRole' ? 'The role has ended.' : 'The request waits for a QA approver.' };
}

export const actions: Actions = {
  status: async ({ request, locals, params }) => {
    const form = await request.formData();
    const values = { form: 'status', status: text(form, 'status'), reason: text(form, 'reason') };
    const { status, reason } = values;
    if (status !== 'active' && status !== 'suspended' && status !== 'left')
      return formFailure(
        refuse('bad-input', 'Nothing was changed.', { status: 'Choose the new state' }),
        values
      );
    const outcome = await setAccountStatus(database(), requireAct(locals), params.id, status, reason);
    return outcome.ok ? { said: 'The state of the account has changed.' } : formFailure(outcome, values);
  },
  endSessions: async ({ locals, params }) => {
    const outcome = await endSessions(database(), requireAct(locals), params.id);
    return outcome.ok ? { said: `Sessions ended: ${outcome.value.count}.` } : formFailure(outcome);
  },
  link: async ({ locals, params, url }) => {
    const outcome = await makePasswordLink(database(), requireAct(locals), params.id);
    if (!outcome.ok) return formFailure(outcome);
    return { link: new URL(passwordPath(outcome.value.token), url.origin).href };
  },
  requestRole: (event) => changeRole(event, 'requestRole', requestRole),
  endRole: (event) => changeRole(event, 'endRole', endRole)
};

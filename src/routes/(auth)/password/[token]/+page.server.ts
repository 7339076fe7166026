import { error } from '@sveltejs/kit';
import { problemOf, refuse, type Refusal } from '$lib/domain/refusals';
import { setPasswordByLink } from '$lib/server/commands/passwords';
import { database } from '$lib/server/db/client';
import { countGuess, guessesLeft } from '$lib/server/platform/guessLimit';
import { readPasswordLink } from '$lib/server/platform/passwordLinks';
import { formFailure } from '$lib/server/platform/respond';
import type { Actions, PageServerLoad } from './$types';

function stop(refusal: Refusal): never {
  const { status, detail, next } = problemOf(refusal);
  error(status, { message: detail, next, errorId: '' });
}

async function stopGuessing(address: string): Promise<void> {
  if (!(await guessesLeft(address)))
    stop(refuse('too-many', 'There were too many wrong sign-ins or links from this place.'));
}

/** Looking at the page uses nothing up: mail programs open links before people do. */
export const load: PageServerLoad = async ({ params, getClientAddress, request }) => {
  const address = getClientAddress();
  await stopGuessing(address);
  const link = await readPasswordLink(database(), params.token);
  // The page after a successful form has a spent link, and says so by its form's data.
  if (link?.usedAt && request.method === 'POST')
    return { userName: link.user.userName, printedName: link.user.printedName, accepted: true };
  if (!link) await countGuess(address);
  if (!link || link.spent) stop(refuse('link-spent', link?.spent ?? 'There is no such link.'));
  return {
    userName: link.user.userName,
    printedName: link.user.printedName,
    accepted: link.user.statementAcceptedAt !== null
  };
};

export const actions: Actions = {
  default: async ({ request, params, locals, getClientAddress }) => {
    const address = getClientAddress();
    await stopGuessing(address);
    const form = await request.formData();
    const typed = (name: string) => String(form.get(name) ?? '').slice(0, 1000);
    const outcome = await setPasswordByLink(
      database(),
      {
        token: params.token,
        password: typed('password'),
        again: typed('again'),
        accepted: form.get('accepted') === 'yes'
      },
      locals.requestId
    );
    if (outcome.ok) return { set: outcome.value.userName };
    if (outcome.code === 'link-spent') {
      await countGuess(address);
      stop(outcome);
    }
    return formFailure(outcome, { accepted: form.get('accepted') === 'yes' });
  }
};

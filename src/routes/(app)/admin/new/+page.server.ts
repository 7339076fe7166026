import { newAccountSchema } from '$lib/domain/newAccount';
import { refuse } from '$lib/domain/refusals';
import { createAccount } from '$lib/server/commands/people';
import { database } from '$lib/server/db/client';
import { fieldSentences, nested } from '$lib/server/platform/form';
import { passwordPath } from '$lib/server/platform/passwordLinks';
import { formFailure, requireAct } from '$lib/server/platform/respond';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = () => ({});

export const actions: Actions = {
  create: async ({ request, locals, url }) => {
    const values = nested(await request.formData());
    const parsed = newAccountSchema.safeParse(values);
    if (!parsed.success)
      return formFailure(refuse('bad-input', 'No account was made.', fieldSentences(parsed.error)), values);
    const outcome = await createAccount(database(), requireAct(locals), parsed.data);
    if (!outcome.ok) return formFailure(outcome, values);
    const { userName, printedName } = parsed.data;
    const link = new URL(passwordPath(outcome.value.token), url.origin).href;
    return { made: { id: outcome.value.id, userName, printedName, link } };
  }
};

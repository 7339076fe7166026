import { fail, redirect } from '@sveltejs/kit';
import { refuse } from '$lib/domain/refusals';
import { safeNext } from '$lib/domain/safeNext';
import { signInWithForm } from '$lib/server/platform/auth';
import { readDemoAccounts } from '$lib/server/platform/demoAccounts';
import { formFailure, text } from '$lib/server/platform/respond';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, url }) => {
  const next = safeNext(url.searchParams.get('next'));
  if (locals.act) redirect(303, next);
  return {
    next,
    signedOut: url.searchParams.has('out'),
    mustSignIn: url.searchParams.has('next'),
    demoAccounts: await readDemoAccounts()
  };
};

export const actions: Actions = {
  default: async (event) => {
    const form = await event.request.formData();
    const userName = text(form, 'userName').slice(0, 200);
    const password = String(form.get('password') ?? '');
    const fields = {
      ...(userName === '' ? { userName: 'Enter your user name' } : {}),
      ...(password === '' ? { password: 'Enter your password' } : {})
    };
    if (Object.keys(fields).length > 0)
      return formFailure(refuse('bad-input', 'You are not signed in.', fields), { userName });
    const result = await signInWithForm(event, form);
    if (result === 'signed-in') redirect(303, safeNext(text(form, 'next')));
    if (result === 'too-many')
      return formFailure(
        refuse('too-many', 'There were too many wrong sign-ins from this place. Nothing was tried.'),
        { userName }
      );
    // One sentence for every cause: it must not tell which accounts exist.
    const detail =
      'The user name or the password is not right, or the account is locked for a quarter of an hour after wrong passwords.';
    return fail(401, {
      problem: {
        type: 'urn:wharfinger:problem:not-signed-in',
        title: 'You are not signed in',
        status: 401,
        detail,
        next: 'Type both again. If it stays so, ask an administrator.'
      },
      fields: { password: 'Type your password again' } as Record<string, string>,
      values: { userName } as Record<string, unknown>
    });
  }
};

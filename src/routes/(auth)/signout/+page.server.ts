import { redirect } from '@sveltejs/kit';
import { signOutRequest } from '$lib/server/platform/auth';
import type { Actions } from './$types';

export const actions: Actions = {
  default: async (event) => {
    await signOutRequest(event);
    redirect(303, '/signin?out=1');
  }
};

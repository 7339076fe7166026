import { error } from '@sveltejs/kit';
import { problemOf, refuse } from '$lib/domain/refusals';
import { PERMISSIONS, type Action } from '$lib/domain/roles';
import { denialSentence } from '$lib/server/platform/gate';
import type { PageServerLoad } from './$types';

/** What the gate shows in place of a page that the person's roles do not open: within the frame, with the way around. */
export const load: PageServerLoad = ({ url }) => {
  const action = url.searchParams.get('action') ?? '';
  const known = Object.hasOwn(PERMISSIONS, action) ? (action as Action) : null;
  const { title, detail, next, status } = problemOf(refuse('not-allowed', denialSentence(known)));
  error(status, { message: `${title}. ${detail}`, next, errorId: '' });
};

import { error, json, redirect, type Handle, type RequestEvent } from '@sveltejs/kit';
import { problemOf, refuse } from '../../domain/refusals';
import { can, rolesFor } from '../../domain/roles';
import { routeKey, routeRule, type RouteRule } from '../../domain/routeRules';
import { database } from '../db/client';
import type { Act } from './act';
import { apiProblem } from './respond';
import { recordTrail } from './trail';

/**
 * Lets a request through only where the table of routes (domain/routeRules.ts) says so. Nobody signed in:
 * pages lead to the sign-in page and back, the API answers 401. Signed in without the right, or a route that
 * the table does not know: 403, and an entry on the trail.
 */
export const gate: Handle = async ({ event, resolve }) => {
  const { act } = event.locals;
  const routeId = event.route.id;
  if (routeId === null) return act ? resolve(event) : askToSignIn(event);
  const rule = routeRule(event.request.method, routeId, formAction(event));
  if (rule === 'public') return resolve(event);
  if (!act) return askToSignIn(event);
  if (allows(rule, act, event.locals.scopes)) return resolve(event);
  await recordDenial(event, act, rule);
  return answerDenial(event, rule);
};

function allows(rule: RouteRule | null, act: Act, scopes: readonly string[] | null): boolean {
  if (rule === null || rule === 'public') return rule === 'public';
  if (scopes && !scopes.includes(rule)) return false;
  return rule === 'signed-in' || can(act.actor, rule);
}

/** The form action a POST names, read as SvelteKit reads it: the first parameter that begins with a slash. */
function formAction(event: RequestEvent): string | undefined {
  if (event.request.method !== 'POST') return undefined;
  const named = [...event.url.searchParams.keys()].find((name) => name.startsWith('/'));
  return named === undefined || named === '/default' ? undefined : named.slice(1);
}

const isApi = (event: RequestEvent) => event.url.pathname.startsWith('/api/');

function askToSignIn(event: RequestEvent): Response {
  if (isApi(event)) return apiProblem(refuse('not-signed-in', 'The request came without a live session.'));
  if (event.request.method !== 'GET') redirect(303, '/signin');
  const next = event.url.pathname + event.url.search;
  redirect(303, next === '/' ? '/signin' : `/signin?next=${encodeURIComponent(next)}`);
}

/** Who may, in words, for a person who may not. */
export function denialSentence(rule: RouteRule | null): string {
  if (rule === null || rule === 'public' || rule === 'signed-in') return 'This is open to no role.';
  return `This is for: ${rolesFor(rule)}.`;
}

async function answerDenial(event: RequestEvent, rule: RouteRule | null): Promise<Response> {
  const refusal = refuse('not-allowed', denialSentence(rule));
  if (isApi(event)) return apiProblem(refusal);
  const { title, detail, next, status } = problemOf(refusal);
  const shown = { message: `${title}. ${detail}`, next, errorId: '' };
  // A form sent by script, and a page's data fetched by script, are answered in their own formats.
  if (event.request.headers.get('x-sveltekit-action') === 'true')
    return json({ type: 'error', error: shown }, { status });
  if (event.isDataRequest) return json(shown, { status });
  if (event.request.method !== 'GET' || event.isSubRequest) error(status, shown);
  // The page of refusals is a page like any other, so that the person keeps the way around.
  return event.fetch(`/refused?action=${encodeURIComponent(rule ?? '')}`);
}

async function recordDenial(event: RequestEvent, act: Act, rule: RouteRule | null): Promise<void> {
  const key = routeKey(event.request.method, event.route.id ?? '', formAction(event));
  await recordTrail(database(), act, {
    action: 'access.refused',
    recordType: 'route',
    recordId: key.slice(0, 200),
    recordLabel: event.url.pathname.slice(0, 200),
    after: { rule: rule ?? 'not listed', method: event.request.method }
  });
}

import { randomUUID } from 'node:crypto';
import type { Handle, RequestEvent } from '@sveltejs/kit';
import { refuse, type Problem } from '../../domain/refusals';
import { database } from '../db/client';
import { readBearer } from './apiTokens';
import { readSession } from './auth';
import { apiProblem } from './respond';

/** Gives the request its id and an empty seat for who acts, and its answer the headers that every answer has. */
export const requestId: Handle = async ({ event, resolve }) => {
  event.locals.requestId = randomUUID();
  event.locals.act = null;
  event.locals.scopes = null;
  const response = await resolve(event);
  const headers: Record<string, string> = {
    'x-request-id': event.locals.requestId,
    'x-content-type-options': 'nosniff',
    'x-frame-options': 'DENY',
    'referrer-policy': 'same-origin',
    'cross-origin-opener-policy': 'same-origin',
    'cross-origin-resource-policy': 'same-origin',
    'permissions-policy': 'camera=(self), geolocation=(), microphone=(), payment=()',
    ...(event.url.protocol === 'https:'
      ? { 'strict-transport-security': 'max-age=63072000; includeSubDomains' }
      : {})
  };
  for (const [name, value] of Object.entries(headers)) response.headers.set(name, value);
  if (!response.headers.has('cache-control')) response.headers.set('cache-control', 'private, no-store');
  return response;
};

const READS = new Set(['GET', 'HEAD', 'OPTIONS']);
const bearerOf = (event: RequestEvent) =>
  event.url.pathname.startsWith('/api/')
    ? /^Bearer (\S{20,200})$/.exec(event.request.headers.get('authorization') ?? '')?.[1]
    : undefined;

/**
 * Refuses to change anything for another site's page: a request that is not a mere read must name our own
 * address as its origin. An instrument's token is no cookie, so no page can send it unasked: those pass.
 */
export const originGuard: Handle = ({ event, resolve }) => {
  const own = event.request.headers.get('origin') === event.url.origin;
  if (READS.has(event.request.method) || own || bearerOf(event)) return resolve(event);
  return apiProblem(
    refuse('not-allowed', 'The request did not come from a page of this application, so nothing was done.')
  );
};

/** The sign-in library answers at /auth/ too; the pages use it from inside only, so nobody else does. */
export const closedDoor: Handle = ({ event, resolve }) =>
  event.url.pathname.startsWith('/auth/')
    ? apiProblem(refuse('not-found', 'There is no such page.'))
    : resolve(event);

/** Finds out who acts: by an instrument's token in the API, otherwise by the session's cookie. */
export const whoActs: Handle = async ({ event, resolve }) => {
  const bearer = bearerOf(event);
  if (bearer) {
    const found = await readBearer(database(), bearer);
    if (!found)
      return apiProblem(refuse('not-signed-in', 'The access token is not known, or has been revoked.'));
    event.locals.act = { actor: found.person, requestId: event.locals.requestId, sessionKey: null };
    event.locals.scopes = found.scopes;
    return resolve(event);
  }
  const live = await readSession(event);
  if (live)
    event.locals.act = { actor: live.person, requestId: event.locals.requestId, sessionKey: live.sessionKey };
  return resolve(event);
};

/** Whatever goes wrong in the API is told as a problem document, never as a page. */
export const apiProblems: Handle = async ({ event, resolve }) => {
  const response = await resolve(event);
  if (!event.url.pathname.startsWith('/api/') || response.status < 400) return response;
  if (response.headers.get('content-type')?.startsWith('application/problem+json')) return response;
  const errorId = event.locals.errorId ?? '';
  const problem: Problem & { errorId: string } = {
    type: 'urn:wharfinger:problem:error',
    title: response.status >= 500 ? 'Something failed on the server' : 'The request cannot be answered',
    status: response.status,
    detail:
      response.status >= 500
        ? 'Nothing was stored by this request.'
        : `The server answered ${response.status} to ${event.request.method} ${event.url.pathname}.`,
    next: errorId
      ? `Tell an administrator the reference ${errorId}.`
      : 'Look up the address and the method in the description of the API.',
    errorId
  };
  return new Response(JSON.stringify(problem), {
    status: response.status,
    headers: { 'content-type': 'application/problem+json' }
  });
};

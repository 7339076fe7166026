import { randomUUID } from 'node:crypto';
import type { HandleServerError, ServerInit } from '@sveltejs/kit';
import { sequence } from '@sveltejs/kit/hooks';
import { building } from '$app/environment';
import { authHandle } from '$lib/server/platform/auth';
import { gate } from '$lib/server/platform/gate';
import { log } from '$lib/server/platform/log';
import { apiProblems, closedDoor, originGuard, requestId, whoActs } from '$lib/server/platform/requestHooks';
import { startBackground } from '$lib/server/platform/startup';

export const init: ServerInit = async () => {
  if (!building) await startBackground();
};

export const handle = sequence(requestId, apiProblems, originGuard, closedDoor, authHandle, whoActs, gate);

export const handleError: HandleServerError = ({ error, event, status }) => {
  if (status === 404)
    return {
      message: 'There is no such page.',
      errorId: '',
      next: 'Check the address, or begin at the Tally.'
    };
  const errorId = randomUUID().slice(0, 8);
  event.locals.errorId = errorId;
  log.error(
    { err: error, errorId, requestId: event.locals.requestId, route: event.route.id },
    'a request failed'
  );
  return {
    message: 'Something failed on our side. Nothing was stored by this step.',
    errorId,
    next: `Try once more. If it fails again, tell an administrator the reference ${errorId}.`
  };
};

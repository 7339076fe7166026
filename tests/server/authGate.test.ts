import { isHttpError, isRedirect } from '@sveltejs/kit';
import { desc } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { can, ROLE_IDS, type RoleId } from '$lib/domain/roles';
import { ROUTE_RULES } from '$lib/domain/routeRules';
import { closeDatabase } from '$lib/server/db/client';
import { trailEntries } from '$lib/server/db/schema';
import {
  authHandle,
  readSession,
  SESSION_COOKIE,
  signInWithForm,
  signOutRequest
} from '$lib/server/platform/auth';
import { gate } from '$lib/server/platform/gate';
import { closedDoor, originGuard, requestId, whoActs } from '$lib/server/platform/requestHooks';
import { newToken, touchSession } from '$lib/server/platform/sessions';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD, type Fixtures } from '../support/fixtures';
import { requestEvent, type AskedEvent, type AskedRequest } from '../support/requestEvent';

let base: TestDatabase;
let fixtures: Fixtures;

beforeAll(async () => {
  base = await testDatabase();
  fixtures = await makeFixtures(base.db);
  process.env.DATABASE_URL = base.appUrl;
  process.env.AUTH_SECRET = 'only for tests, never for anything else';
});
afterAll(async () => {
  await closeDatabase();
  delete process.env.DATABASE_URL;
  delete process.env.AUTH_SECRET;
  await base.close();
});

type Answer = { status: number; location?: string; passed: boolean; body: string; headers: Headers };

/** Runs one hook and tells what it came to. */
async function answer(hook: typeof gate, event: AskedEvent): Promise<Answer> {
  let passed = false;
  try {
    const response = await hook({
      event,
      resolve: () => {
        passed = true;
        return new Response('the page');
      }
    });
    return { status: response.status, passed, body: await response.text(), headers: response.headers };
  } catch (thrown) {
    if (isRedirect(thrown))
      return { status: thrown.status, location: thrown.location, passed, body: '', headers: new Headers() };
    if (isHttpError(thrown))
      return { status: thrown.status, passed, body: JSON.stringify(thrown.body), headers: new Headers() };
    throw thrown;
  }
}

const as = (role: RoleId | null, asked: AskedRequest) =>
  requestEvent({ ...asked, locals: { act: role ? fixtures.people[role].act : null } });
const [lastEntry] = [
  async () => (await base.db.select().from(trailEntries).orderBy(desc(trailEntries.id)).limit(1))[0]
];

/** The table's keys as requests. */
const LISTED = Object.entries(ROUTE_RULES).map(([key, rule]) => {
  const [, method, path, , formAction] = /^(GET|POST|PUT|PATCH|DELETE) ([^?]+)(\?(.+))?$/.exec(key) ?? [];
  return { key, rule, method, path, routeId: path, address: formAction ? `${path}?/${formAction}` : path };
});

describe('R-003: the gate', () => {
  it.each(LISTED)(
    '$key lets through exactly the roles of its rule',
    async ({ rule, method, address, routeId }) => {
      for (const role of [...ROLE_IDS, null]) {
        const { passed, status } = await answer(gate, as(role, { method, path: address, routeId }));
        const allowed =
          rule === 'public' ||
          (role !== null && (rule === 'signed-in' || can(fixtures.people[role].act.actor, rule)));
        expect([role, passed]).toEqual([role, allowed]);
        if (!allowed) expect(status).toBe(role === null ? (address.startsWith('/api/') ? 401 : 303) : 403);
      }
    }
  );

  it('a route that is not listed is refused to everybody', async () => {
    for (const role of ROLE_IDS) {
      expect((await answer(gate, as(role, { path: '/secret', routeId: '/(app)/secret' }))).status).toBe(403);
      expect(
        (await answer(gate, as(role, { method: 'DELETE', path: '/lots', routeId: '/(app)/lots' }))).status
      ).toBe(403);
      expect(
        (
          await answer(
            gate,
            as(role, { method: 'POST', path: '/lots/1?/forgotten', routeId: '/(app)/lots/[id=uuid]' })
          )
        ).status
      ).toBe(403);
      expect(
        (await answer(gate, as(role, { method: 'POST', path: '/lots/1', routeId: '/(app)/lots/[id=uuid]' })))
          .status
      ).toBe(403);
    }
  });

  it('the form action is the one SvelteKit would run: the first that begins with a slash', async () => {
    const routeId = '/(app)/lots/[id=uuid]';
    const asOperator = (path: string) => answer(gate, as('operator', { method: 'POST', path, routeId }));
    expect((await asOperator('/lots/1?/paper')).passed).toBe(true);
    expect((await asOperator('/lots/1?/release&/paper')).passed).toBe(false);
    expect((await asOperator('/lots/1?x=/paper&/release')).passed).toBe(false);
  });

  it('nobody signed in: a page leads to the sign-in page and back, the API answers 401 as a problem', async () => {
    expect(
      await answer(gate, as(null, { path: '/lots/1?tab=papers', routeId: '/(app)/lots/[id=uuid]' }))
    ).toMatchObject({ status: 303, location: '/signin?next=%2Flots%2F1%3Ftab%3Dpapers' });
    expect(await answer(gate, as(null, { path: '/', routeId: '/(app)' }))).toMatchObject({
      location: '/signin'
    });
    expect(await answer(gate, as(null, { path: '/nothing', routeId: null }))).toMatchObject({
      location: '/signin?next=%2Fnothing'
    });
    const api = await answer(
      gate,
      as(null, { method: 'POST', path: '/api/v1/scans', routeId: '/api/v1/scans' })
    );
    expect(api.status).toBe(401);
    expect(api.headers.get('content-type')).toBe('application/problem+json');
    expect(JSON.parse(api.body)).toMatchObject({ type: 'urn:wharfinger:problem:not-signed-in', status: 401 });
  });

  it('an address that does not exist is "not found" only to whoever is signed in', async () => {
    expect((await answer(gate, as('operator', { path: '/nothing', routeId: null }))).passed).toBe(true);
  });

  it('a denial names the roles that may, each caller in its own format, and is on the trail', async () => {
    const page = { path: '/trail', routeId: '/(app)/trail' };
    expect((await answer(gate, as('operator', page))).body).toBe('fetched /refused?action=trail.read');
    expect(await lastEntry()).toMatchObject({
      action: 'access.refused',
      recordId: 'GET /trail',
      actorName: 'Person operator',
      after: { rule: 'trail.read' }
    });
    const data = await answer(gate, as('operator', { ...page, isDataRequest: true }));
    expect(JSON.parse(data.body).message).toContain('This is for: QA approver, Auditor or Administrator.');
    const form = { method: 'POST', path: '/lots/1?/release', routeId: '/(app)/lots/[id=uuid]' };
    const scripted = await answer(
      gate,
      as('operator', { ...form, headers: { 'x-sveltekit-action': 'true' } })
    );
    expect(JSON.parse(scripted.body)).toMatchObject({
      type: 'error',
      error: { message: expect.stringContaining('QA approver') }
    });
    expect((await answer(gate, as('operator', form))).status).toBe(403);
    const api = await answer(
      gate,
      as('auditor', { method: 'POST', path: '/api/v1/scans', routeId: '/api/v1/scans' })
    );
    expect(JSON.parse(api.body)).toMatchObject({
      status: 403,
      detail: 'This is for: Warehouse QC operator.'
    });
  });

  it("an instrument's token does only what its scopes say, within its owner's rights", async () => {
    const { act } = fixtures.people.operator;
    const asToken = (scopes: string[], path: string, method: string, routeId: string) =>
      answer(gate, requestEvent({ method, path, routeId, locals: { act, scopes } }));
    expect((await asToken(['scan.record'], '/api/v1/scans', 'POST', '/api/v1/scans')).passed).toBe(true);
    expect((await asToken(['scan.record'], '/api/v1/scans/1', 'GET', '/api/v1/scans/[id=uuid]')).passed).toBe(
      false
    );
    expect(
      (await asToken(['scan.record', 'lot.release'], '/lots/1?/release', 'POST', '/(app)/lots/[id=uuid]'))
        .passed
    ).toBe(false);
  });
});

describe('the origin of a request that changes something', () => {
  const asked = (headers: Record<string, string>, method = 'POST', path = '/signin') =>
    answer(originGuard, requestEvent({ method, path, routeId: path, headers }));
  const own = 'http://127.0.0.1:4180';

  it('must be our own: foreign, absent and null are refused, for every method that is no mere read', async () => {
    expect((await asked({ origin: own })).passed).toBe(true);
    for (const origin of [
      'https://elsewhere.test',
      'null',
      'http://127.0.0.1:4181',
      'http://127.0.0.1:4180.elsewhere.test',
      'https://127.0.0.1:4180'
    ]) {
      expect(await asked({ origin })).toMatchObject({ passed: false, status: 403 });
    }
    for (const method of ['POST', 'PUT', 'PATCH', 'DELETE', 'PROPFIND'])
      expect((await asked({}, method)).passed).toBe(false);
    expect((await asked({ 'content-type': 'text/plain' })).passed).toBe(false);
  });

  it("does not matter for reads, and for an instrument's token in the API only", async () => {
    expect((await asked({}, 'GET')).passed).toBe(true);
    const authorization = `Bearer ${newToken()}`;
    expect((await asked({ authorization }, 'POST', '/api/v1/scans')).passed).toBe(true);
    expect((await asked({ authorization }, 'POST', '/lots/1')).passed).toBe(false);
  });
});

describe('the sign-in library behind the pages', () => {
  const form = (fields: Record<string, string>) => {
    const data = new FormData();
    for (const [name, value] of Object.entries(fields)) data.set(name, value);
    return data;
  };
  const withAuth = async (asked: AskedRequest) => {
    const event = requestEvent(asked);
    await authHandle({ event, resolve: () => new Response() });
    return event;
  };
  const signinPage = {
    method: 'POST',
    path: '/signin',
    routeId: '/(auth)/signin',
    headers: { origin: 'http://127.0.0.1:4180' }
  };

  it('sets a cookie that scripts cannot read, bound to this host and to secure transport, with a new token', async () => {
    const planted = newToken();
    const event = await withAuth({ ...signinPage, cookies: { [SESSION_COOKIE]: planted } });
    expect(await signInWithForm(event, form({ userName: 'operator', password: PASSWORD }))).toBe('signed-in');
    const cookie = event.jar.get(SESSION_COOKIE);
    expect(cookie?.value).not.toBe(planted);
    expect(cookie?.options).toMatchObject({ httpOnly: true, secure: true, sameSite: 'lax', path: '/' });
    expect(SESSION_COOKIE.startsWith('__Host-')).toBe(true);
    const next = await withAuth({
      path: '/',
      routeId: '/(app)',
      cookies: { [SESSION_COOKIE]: String(cookie?.value) }
    });
    expect((await readSession(next))?.person.userName).toBe('operator');
    expect(next.jar.get(SESSION_COOKIE)?.value).toBe(cookie?.value);
  });

  it('sets none for a wrong password', async () => {
    const event = await withAuth(signinPage);
    expect(
      await signInWithForm(event, form({ userName: 'operator', password: 'a wrong one, long enough' }))
    ).toBe('wrong');
    expect(event.jar.get(SESSION_COOKIE)?.value ?? '').toBe('');
  });

  it('R-015: signing out ends the session itself, and takes the cookie', async () => {
    const { token } = await fixtures.addPerson('goes-home', ['operator']);
    const event = await withAuth({
      method: 'POST',
      path: '/signout',
      routeId: '/(auth)/signout',
      cookies: { [SESSION_COOKIE]: token },
      headers: { origin: 'http://127.0.0.1:4180' }
    });
    await signOutRequest(event);
    expect(event.jar.get(SESSION_COOKIE)?.value).toBe('');
    expect(await touchSession(base.db, token)).toBeNull();
  });

  it('answers nobody at its own addresses', async () => {
    for (const path of [
      '/auth/session',
      '/auth/callback/credentials',
      '/auth/signin',
      '/auth/csrf',
      '/auth/providers'
    ]) {
      expect(await answer(closedDoor, requestEvent({ path, routeId: null }))).toMatchObject({
        passed: false,
        status: 404
      });
    }
  });

  it("whoActs seats the session's person, and nobody for a token of the past", async () => {
    const { token, id } = await fixtures.addPerson('sits-down', ['auditor']);
    const seat = async (value: string) => {
      const event = await withAuth({ path: '/', routeId: '/(app)', cookies: { [SESSION_COOKIE]: value } });
      await answer(whoActs, event);
      return event.locals.act;
    };
    expect((await seat(token))?.actor.id).toBe(id);
    expect(await seat(newToken())).toBeNull();
  });
});

describe('every answer', () => {
  it('carries the headers that keep it from being framed, sniffed, kept or referred to', async () => {
    const { headers } = await answer(requestId, requestEvent({ path: '/', routeId: '/(app)' }));
    expect(Object.fromEntries(headers)).toMatchObject({
      'x-content-type-options': 'nosniff',
      'x-frame-options': 'DENY',
      'referrer-policy': 'same-origin',
      'cross-origin-opener-policy': 'same-origin',
      'cache-control': 'private, no-store',
      'x-request-id': expect.stringMatching(/^[0-9a-f-]{36}$/)
    });
  });
});

import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { can, ROLE_IDS, rolesFor, type Action } from '$lib/domain/roles';
import { ROUTE_RULES } from '$lib/domain/routeRules';
import { startApplication, type RunningApplication } from '../support/application';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, type Fixtures } from '../support/fixtures';

let database: TestDatabase;
let people: Fixtures['people'];
let addPerson: Fixtures['addPerson'];
let app: RunningApplication;

beforeAll(async () => {
  database = await testDatabase();
  ({ people, addPerson } = await makeFixtures(database.db));
  app = await startApplication(database.appUrl);
});
afterAll(async () => {
  await app?.stop();
  await database?.close();
});

/** Nothing of this id exists, so an allowed request changes nothing either. */
const ABSENT = randomUUID();

function addressOf(key: string): { method: string; path: string } {
  const [method, rest] = key.split(' ');
  const [route, formAction] = rest.split('?');
  const path = route.replaceAll(/\[[^\]]+\]/g, ABSENT);
  return { method, path: formAction ? `${path}?/${formAction}` : path };
}

type Seen = 'let in' | 'sent to sign in' | 'refused';

async function ask(
  key: string,
  token: string | undefined
): Promise<{ seen: Seen; status: number; body: string }> {
  const { method, path } = addressOf(key);
  const body = method === 'GET' ? undefined : new FormData();
  const response = await app.request(path, { method, body, token, headers: { accept: 'text/html' } });
  const text = await response.text();
  const location = response.headers.get('location') ?? '';
  const api = path.startsWith('/api/');
  if (api && response.status === 401) return { seen: 'sent to sign in', status: response.status, body: text };
  if (response.status === 303 && location.startsWith('/signin') && path !== '/signout')
    return { seen: 'sent to sign in', status: response.status, body: text };
  if (response.status === 403) return { seen: 'refused', status: response.status, body: text };
  return { seen: 'let in', status: response.status, body: text };
}

/** Signing out ends the session the test still needs; the page of refusals is a refusal itself. */
const KEYS = Object.keys(ROUTE_RULES).filter((key) => !key.endsWith('/signout') && key !== 'GET /refused');

describe.each(KEYS)('R-003, R-004: %s', (key) => {
  const rule = ROUTE_RULES[key];

  test('is open to the roles of the table and to nobody else', async () => {
    const seen: Record<string, Seen> = {};
    const expected: Record<string, Seen> = {};
    for (const role of ROLE_IDS) {
      const answer = await ask(key, people[role].token);
      seen[role] = answer.seen;
      expected[role] =
        rule === 'public' || rule === 'signed-in' || can({ roles: [role] }, rule) ? 'let in' : 'refused';
      expect([key, role, answer.status < 500]).toEqual([key, role, true]);
      if (answer.seen === 'refused')
        expect(answer.body).toContain(rolesFor(rule as Action).replaceAll("'", '&#39;'));
      if (answer.seen === 'refused' && key.includes(' /api/'))
        expect(JSON.parse(answer.body)).toMatchObject({
          status: 403,
          type: 'urn:wharfinger:problem:not-allowed'
        });
    }
    seen.nobody = (await ask(key, undefined)).seen;
    expected.nobody = rule === 'public' ? 'let in' : 'sent to sign in';
    expect(seen).toEqual(expected);
  });
});

test('R-003: a refusal is on the trail with who asked for what', async () => {
  const before =
    await database.ownerSql`select count(*)::int as n from trail_entries where action = 'access.refused'`;
  await ask('GET /admin', people.operator.token);
  const after =
    await database.ownerSql`select actor_name, after from trail_entries where action = 'access.refused' order by id desc limit 1`;
  const [{ n }] =
    await database.ownerSql`select count(*)::int as n from trail_entries where action = 'access.refused'`;
  expect(n).toBe(Number(before[0].n) + 1);
  expect(after[0].actor_name).toBe('Person operator');
});

test('an address that no file answers is a page that is not there, for people who are signed in', async () => {
  expect((await app.request('/nowhere', { token: people.operator.token })).status).toBe(404);
  expect((await app.request('/nowhere')).headers.get('location')).toBe('/signin?next=%2Fnowhere');
});

test('R-015: a copied cookie is worth nothing after its owner signed out, and a suspended account nothing at once', async () => {
  const gone = await addPerson('goes', ['operator']);
  expect((await app.request('/lots', { token: gone.token })).status).toBe(200);
  await app.request('/signout', { method: 'POST', body: new FormData(), token: gone.token });
  expect((await app.request('/lots', { token: gone.token })).headers.get('location')).toMatch(/^\/signin/);
  const other = await addPerson('suspended', ['operator']);
  expect((await app.request('/lots', { token: other.token })).status).toBe(200);
  await database.ownerSql`update users set status = 'suspended' where id = ${other.id}`;
  expect((await app.request('/api/v1/scans/' + ABSENT, { token: other.token })).status).toBe(401);
});

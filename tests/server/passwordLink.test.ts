import { afterAll, beforeAll, expect, test } from 'vitest';
import { newToken } from '$lib/server/platform/sessions';
import { startApplication, type RunningApplication } from '../support/application';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, type Fixtures } from '../support/fixtures';

let database: TestDatabase;
let people: Fixtures['people'];
let app: RunningApplication;
beforeAll(async () => {
  database = await testDatabase();
  ({ people } = await makeFixtures(database.db));
  app = await startApplication(database.appUrl);
});
afterAll(async () => {
  await app?.stop();
  await database?.close();
});

const formOf = (values: Record<string, string>) => {
  const form = new FormData();
  for (const [name, value] of Object.entries(values)) form.set(name, value);
  return form;
};
const PASSWORD = 'seven herons stand at low tide';
const typed = { password: PASSWORD, again: PASSWORD, accepted: 'yes' };
const asPage = { accept: 'text/html' };
const post = (path: string, values: Record<string, string>, token?: string) =>
  app.request(path, { method: 'POST', body: formOf(values), token, headers: asPage });
const get = (path: string) => app.request(path, { headers: asPage });

/** Path of the link that the page shows. */
async function linkIn(response: Response): Promise<string> {
  const found = /\/password\/[\w-]{43}/.exec(await response.text());
  if (!found) throw new Error('the page shows no link');
  return found[0];
}
const resetLink = async () =>
  linkIn(await post(`/admin/${people.operator.id}?/link`, {}, people.administrator.token));

test('R-009: a link sets a password once; the second use is 410 and says what to do', async () => {
  const made = await post(
    '/admin/new?/create',
    {
      userName: 'n.ferreira',
      personId: 'N-1',
      printedName: 'Nuno Ferreira',
      email: 'nuno@example.test',
      proofedBy: 'Rita Couto',
      proofedOn: '2026-01-05'
    },
    people.administrator.token
  );
  expect(made.status).toBe(200);
  const path = await linkIn(made);
  // Looking, as a mail program does, uses nothing up.
  for (let look = 0; look < 3; look++) {
    const page = await get(path);
    expect([page.status, await page.text()]).toEqual([200, expect.stringContaining('Nuno Ferreira')]);
  }
  const weak = await post(path, { ...typed, password: 'short', again: 'short' });
  expect([weak.status, await weak.text()]).toEqual([422, expect.stringContaining('at least 15 characters')]);
  const set = await post(path, typed);
  expect([set.status, await set.text()]).toEqual([200, expect.stringContaining('Your password is set')]);
  for (const again of [await post(path, typed), await get(path)]) {
    const page = await again.text();
    expect(again.status).toBe(410);
    expect(page).toContain('It sets a password once');
    expect(page).toContain('Ask an administrator for a new link');
  }
});

test('R-009: after fifteen minutes it is 410', async () => {
  const path = await resetLink();
  await database.ownerSql.begin(async (owner) => {
    await owner`alter table password_links disable trigger check_link`;
    await owner`update password_links set expires_at = clock_timestamp() where used_at is null and withdrawn_at is null`;
    await owner`alter table password_links enable always trigger check_link`;
  });
  expect((await get(path)).status).toBe(410);
  expect((await post(path, typed)).status).toBe(410);
});

test("another site's page sets no password with a link", async () => {
  const path = await resetLink();
  const answer = await app.request(path, {
    method: 'POST',
    body: formOf(typed),
    headers: { ...asPage, origin: 'https://elsewhere.example' }
  });
  expect(answer.status).toBe(403);
  expect((await get(path)).status).toBe(200);
});

test('R-011: who guesses at links is stopped, and then no good link opens either from there', async () => {
  const path = await resetLink();
  const statuses = new Set<number>();
  for (let guess = 0; guess < 60; guess++) statuses.add((await get(`/password/${newToken()}`)).status);
  expect([...statuses]).toEqual([410, 429]);
  expect((await get(path)).status).toBe(429);
});

import { randomUUID } from 'node:crypto';
import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { newAccountSchema, type NewAccount } from '$lib/domain/newAccount';
import { ROLE_IDS } from '$lib/domain/roles';
import { changeOwnPassword, makePasswordLink, setPasswordByLink } from '$lib/server/commands/passwords';
import { createAccount, endOwnSession, endSessions, setAccountStatus } from '$lib/server/commands/people';
import { verifyPassword } from '$lib/server/platform/password';
import { openSession, tokenKey, touchSession } from '$lib/server/platform/sessions';
import { signInWithPassword } from '$lib/server/platform/signIn';
import { listSessions } from '$lib/server/queries/people';
import { must } from '../../scripts/demo/must';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD, type Fixtures } from '../support/fixtures';

let database: TestDatabase;
let fixtures: Fixtures;
let people: Fixtures['people'];
beforeAll(async () => {
  database = await testDatabase();
  fixtures = await makeFixtures(database.db);
  people = fixtures.people;
});
afterAll(() => database.close());

const NEW_PASSWORD = 'seven herons stand at low tide';
let made = 0;
const input = (more: Partial<NewAccount> = {}): NewAccount => {
  made += 1;
  return {
    userName: `n.ferreira${made}`,
    personId: `N-${made}`,
    printedName: 'Nuno Ferreira',
    email: 'nuno@example.test',
    proofedBy: 'Rita Couto, personnel',
    proofedOn: '2026-01-05',
    ...more
  };
};
const create = (more: Partial<NewAccount> = {}) =>
  createAccount(database.db, people.administrator.act, input(more));
const setWith = (token: string, more: Partial<Parameters<typeof setPasswordByLink>[1]> = {}) =>
  setPasswordByLink(
    database.db,
    { token, password: NEW_PASSWORD, again: NEW_PASSWORD, accepted: true, ...more },
    'a request'
  );
const userRow = async (id: string) => (await database.ownerSql`select * from users where id = ${id}`)[0];
const trailOf = async (recordId: string) =>
  (await database.ownerSql`select action from trail_entries where record_id = ${recordId} order by id`).map(
    (row) => String(row.action)
  );
/** What a refused command could have left behind. */
const counts = async () =>
  (
    await database.ownerSql`select (select count(*)::int from users) as users, (select count(*)::int from password_links) as links,
      (select count(*)::int from role_grants where ended_at is null) as grants, (select count(*)::int from role_requests) as requests,
      (select count(*)::int from trail_entries where action not like 'signature.%') as entries`
  )[0];
async function expectNothing(refused: Promise<unknown>, answer: object): Promise<void> {
  const before = await counts();
  expect(await refused).toMatchObject({ ok: false, ...answer });
  expect(await counts()).toEqual(before);
}

describe('R-001, R-002: an account is one named person whose identity was seen', () => {
  test('an administrator makes it, with no password and no role, and a link', async () => {
    const { id, token } = must(await create());
    const row = await userRow(id);
    expect(row).toMatchObject({ password_hash: null, proofed_by: 'Rita Couto, personnel', status: 'active' });
    expect((row.proofed_at as Date).toISOString()).toBe('2026-01-05T00:00:00.000Z');
    expect(await trailOf(id)).toEqual(['account.create']);
    expect(Buffer.from(token, 'base64url')).toHaveLength(32);
  });

  test.each(ROLE_IDS.filter((role) => role !== 'administrator'))('%s makes none', (role) =>
    expectNothing(createAccount(database.db, people[role].act, input()), { code: 'not-allowed' })
  );

  test('a personnel number or user name is never used twice, whatever its case and after its owner left', async () => {
    const first = input();
    const { id } = must(await createAccount(database.db, people.administrator.act, first));
    must(await setAccountStatus(database.db, people.administrator.act, id, 'left', 'Has left'));
    await expectNothing(create({ personId: first.personId }), {
      code: 'already-exists',
      fields: { personId: `The person of this number has the account ${first.userName}` }
    });
    await expectNothing(create({ userName: first.userName.toUpperCase() }), {
      code: 'already-exists',
      fields: { userName: expect.stringContaining('another person') }
    });
  });

  test('of two accounts for one person made at the same moment, one is made', async () => {
    const personId = `N-${randomUUID()}`;
    const outcomes = await Promise.all(Array.from({ length: 6 }, () => create({ personId })));
    expect(outcomes.filter((outcome) => outcome.ok)).toHaveLength(1);
  });

  test('a proof of identity from tomorrow is refused', () =>
    expectNothing(create({ proofedOn: '2099-01-05' }), {
      code: 'bad-input',
      fields: { proofedOn: expect.any(String) }
    }));

  test.each(['admin', 'qc', 'test', 'guest', 'operator', 'QC-2', 'lab.user', 'Administrator1', 'qa_shift_3'])(
    'the name %s is nobody and refused',
    (userName) => {
      const parsed = newAccountSchema.safeParse(input({ userName }));
      expect(parsed.error?.issues.map((issue) => issue.path[0])).toContain('userName');
      expect(newAccountSchema.safeParse(input({ printedName: userName })).success).toBe(false);
    }
  );

  test.each(['n.ferreira', 'test.alvares', 'li-wei', 'maria2'])('the name %s may be a person', (userName) => {
    expect(newAccountSchema.safeParse(input({ userName })).success).toBe(true);
  });

  test.each(['proofedBy', 'proofedOn', 'personId', 'printedName', 'email', 'userName'])(
    '%s must be given',
    (field) => {
      expect(newAccountSchema.safeParse({ ...input(), [field]: ' ' }).error?.issues[0].path).toEqual([field]);
    }
  );
});

describe('R-009: only the owner sets a password, with a link that is good once', () => {
  test('the link sets it, the person signs in, the statement is accepted, and the link is spent', async () => {
    const { id, token } = must(await create());
    must(await setWith(token));
    const row = await userRow(id);
    expect(await verifyPassword(String(row.password_hash), NEW_PASSWORD)).toBe(true);
    expect(row.statement_accepted_at).toBeInstanceOf(Date);
    expect(await trailOf(id)).toEqual(['account.create', 'account.password', 'account.statement']);
    const claim = { userName: String(row.user_name), password: NEW_PASSWORD, requestId: 'r' };
    expect(await signInWithPassword(database.db, claim)).not.toBeNull();
    await expectNothing(setWith(token, { password: PASSWORD, again: PASSWORD }), { code: 'link-spent' });
  });

  test('of several uses at once one sets the password', async () => {
    const { token } = must(await create());
    const outcomes = await Promise.all(Array.from({ length: 5 }, () => setWith(token)));
    expect(outcomes.filter((outcome) => outcome.ok)).toHaveLength(1);
  });

  test('after a quarter of an hour it is refused, by the database too', async () => {
    const { id, token } = must(await create());
    // As the owner, around the guard: time cannot be waited for in a test.
    await database.ownerSql.begin(async (owner) => {
      await owner`alter table password_links disable trigger check_link`;
      await owner`update password_links set expires_at = clock_timestamp() where user_id = ${id}`;
      await owner`alter table password_links enable always trigger check_link`;
    });
    await expectNothing(setWith(token), {
      code: 'link-spent',
      detail: expect.stringContaining('15 minutes')
    });
    const used = sql`update password_links set used_at = clock_timestamp() where user_id = ${id}`;
    await expect(database.db.execute(used)).rejects.toMatchObject({
      cause: { message: expect.stringContaining('lapsed') }
    });
  });

  test('it lives fifteen minutes, and the table holds no token', async () => {
    const { id, token } = must(await create());
    const [row] =
      await database.ownerSql`select *, extract(epoch from expires_at - created_at) as life from password_links where user_id = ${id}`;
    expect(Math.round(Number(row.life))).toBe(900);
    expect(row.token_hash).toBe(tokenKey(token));
    expect(JSON.stringify(row)).not.toContain(token);
    const [{ found }] =
      await database.ownerSql`select count(*)::int as found from trail_entries where content like ${`%${token}%`}`;
    expect(found).toBe(0);
  });

  test('a newer link takes the place of an older one', async () => {
    const { id, token } = must(await create());
    const { token: newer } = must(await makePasswordLink(database.db, people.administrator.act, id));
    expect(await setWith(token)).toMatchObject({ ok: false, code: 'link-spent' });
    expect(await setWith(newer)).toMatchObject({ ok: true });
  });

  test('a reset ends the sessions, lifts the lock, and keeps the statement of before', async () => {
    const person = await fixtures.addPerson('forgets', ['operator'], { lockedUntil: new Date('2099-01-01') });
    const { token } = must(await makePasswordLink(database.db, people.administrator.act, person.id));
    expect(await touchSession(database.db, person.token)).not.toBeNull();
    must(await setWith(token, { accepted: false }));
    expect(await touchSession(database.db, person.token)).toBeNull();
    const row = await userRow(person.id);
    expect(row.locked_until).toBeNull();
    expect((row.statement_accepted_at as Date).toISOString()).toBe('2026-01-05T08:30:00.000Z');
    expect(await trailOf(person.id)).toEqual(['account.password-link', 'account.password']);
  });

  test('R-007, R-017: a weak password, two that differ or no statement leave the link good', async () => {
    const { token } = must(await create());
    const fault = async (more: object) => {
      const outcome = await setWith(token, more);
      return outcome.ok ? 'set' : outcome.fields;
    };
    expect(await fault({ password: 'fourteen chars', again: 'fourteen chars' })).toEqual({
      password: expect.stringContaining('at least 15')
    });
    expect(await fault({ password: 'nuno ferreira nuno', again: 'nuno ferreira nuno' })).toEqual({
      password: expect.stringContaining('Too easy')
    });
    expect(await fault({ again: 'seven herons' })).toEqual({ again: expect.any(String) });
    expect(await fault({ accepted: false })).toEqual({ accepted: expect.any(String) });
    expect(await fault({})).toBe('set');
  });

  test('links are made by administrators, for others, and for active accounts', async () => {
    const { id } = must(await create());
    const { administrator, approver } = people;
    await expectNothing(makePasswordLink(database.db, approver.act, id), { code: 'not-allowed' });
    await expectNothing(makePasswordLink(database.db, administrator.act, administrator.id), {
      code: 'own-work'
    });
    await expectNothing(makePasswordLink(database.db, administrator.act, randomUUID()), {
      code: 'not-found'
    });
    must(await setAccountStatus(database.db, administrator.act, id, 'suspended', 'On leave'));
    await expectNothing(makePasswordLink(database.db, administrator.act, id), { code: 'wrong-state' });
  });

  test('a suspended account sets no password with a link of before', async () => {
    const { id, token } = must(await create());
    must(await setAccountStatus(database.db, people.administrator.act, id, 'suspended', 'On leave'));
    await expectNothing(setWith(token), { code: 'wrong-state' });
    expect((await userRow(id)).password_hash).toBeNull();
  });
});

describe("one's own account", () => {
  const change = (act: Fixtures['people']['operator']['act'], more: object = {}) =>
    changeOwnPassword(database.db, act, {
      old: PASSWORD,
      password: NEW_PASSWORD,
      again: NEW_PASSWORD,
      ...more
    });

  test('the password is changed with the old one; the other sessions end, this one stays', async () => {
    const person = await fixtures.addPerson('changes', ['operator']);
    const elsewhere = await openSession(database.db, person.id, {});
    expect(must(await change(person.act))).toEqual({ sessionsEnded: 1 });
    expect(await touchSession(database.db, elsewhere)).toBeNull();
    expect(await touchSession(database.db, person.token)).not.toBeNull();
    expect(await verifyPassword(String((await userRow(person.id)).password_hash), NEW_PASSWORD)).toBe(true);
  });

  test('a wrong old password changes nothing, and the third ends the session', async () => {
    const person = await fixtures.addPerson('guesses', ['operator']);
    const { password_hash: before } = await userRow(person.id);
    for (const code of ['signature-wrong', 'signature-wrong', 'not-signed-in'])
      expect(await change(person.act, { old: 'not it at all, no' })).toMatchObject({ ok: false, code });
    expect((await userRow(person.id)).password_hash).toBe(before);
    expect(await touchSession(database.db, person.token)).toBeNull();
    expect((await trailOf(person.id)).filter((action) => action === 'account.password-refused')).toHaveLength(
      3
    );
  });

  test('a weak new password changes nothing', async () => {
    const person = await fixtures.addPerson('weakly', ['operator']);
    await expectNothing(change(person.act, { password: 'short', again: 'short' }), { code: 'bad-input' });
  });

  test("R-015: a person sees and ends their own sessions, and nobody else's", async () => {
    const person = await fixtures.addPerson('roams', ['auditor']);
    const elsewhere = await openSession(database.db, person.id, { address: '192.0.2.7' });
    expect(await listSessions(database.db, person.id)).toHaveLength(2);
    await expectNothing(endOwnSession(database.db, people.operator.act, tokenKey(elsewhere)), {
      code: 'not-found'
    });
    expect(must(await endOwnSession(database.db, person.act, tokenKey(elsewhere)))).toEqual({
      current: false
    });
    expect(await touchSession(database.db, elsewhere)).toBeNull();
    await expectNothing(endOwnSession(database.db, person.act, tokenKey(elsewhere)), { code: 'not-found' });
    expect(must(await endOwnSession(database.db, person.act, tokenKey(person.token)))).toEqual({
      current: true
    });
  });

  test('an administrator ends all sessions of another', async () => {
    const person = await fixtures.addPerson('wanders', ['operator']);
    await expectNothing(endSessions(database.db, people.approver.act, person.id), { code: 'not-allowed' });
    expect(must(await endSessions(database.db, people.administrator.act, person.id))).toEqual({ count: 1 });
    expect(await touchSession(database.db, person.token)).toBeNull();
  });
});

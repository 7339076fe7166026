import { randomUUID } from 'node:crypto';
import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { roleConflict } from '$lib/domain/roleConflicts';
import { ROLE_IDS, type RoleId } from '$lib/domain/roles';
import { setAccountStatus } from '$lib/server/commands/people';
import { decideRole, endRole, requestRole } from '$lib/server/commands/roleGrants';
import { touchSession } from '$lib/server/platform/sessions';
import { verifySignature } from '$lib/server/platform/verifySignature';
import { listGrants, listWaitingRoles } from '$lib/server/queries/roleGrants';
import { listTally } from '$lib/server/queries/tally';
import { must } from '../../scripts/demo/must';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD, type Fixtures, type Person } from '../support/fixtures';

let database: TestDatabase;
let fixtures: Fixtures;
let people: Fixtures['people'];
beforeAll(async () => {
  database = await testDatabase();
  fixtures = await makeFixtures(database.db);
  people = fixtures.people;
});
afterAll(() => database.close());

let made = 0;
const somebody = (roles: readonly RoleId[] = []) => fixtures.addPerson(`somebody${(made += 1)}`, roles);
const ask = (
  userId: string,
  role: RoleId,
  by: Person = people.administrator,
  reason = 'Joins the dock team'
) => requestRole(database.db, by.act, { userId, role, reason });
const decide = (requestId: string, by: Person = people.approver, more: object = {}) =>
  decideRole(database.db, by.act, {
    requestId,
    outcome: 'granted',
    reason: 'Trained and needed',
    password: PASSWORD,
    ...more
  });
const end = (userId: string, role: RoleId, by: Person = people.administrator, reason = 'Moves on') =>
  endRole(database.db, by.act, { userId, role, reason });
const rolesOf = async (person: Person) => (await touchSession(database.db, person.token))?.person.roles;
const counts = async () =>
  (
    await database.ownerSql`select (select count(*)::int from role_grants where ended_at is null) as grants,
      (select count(*)::int from role_requests) as requests, (select count(*)::int from role_requests where outcome is null) as waiting,
      (select count(*)::int from signatures) as signatures, (select count(*)::int from outbox_mails) as mails,
      (select count(*)::int from trail_entries where action not like 'signature.refused') as entries`
  )[0];
async function expectNothing(refused: Promise<unknown>, answer: object): Promise<void> {
  const before = await counts();
  expect(await refused).toMatchObject({ ok: false, ...answer });
  expect(await counts()).toEqual(before);
}

describe('R-005: a role is asked for by one person and granted by another', () => {
  test('it waits, then takes effect with the signature, at the next request of the person', async () => {
    const person = await somebody();
    const { id } = must(await ask(person.id, 'operator'));
    expect(await rolesOf(person)).toEqual([]);
    const lines = await listTally(database.db, people.approver.act.actor);
    expect(lines.filter((line) => line.kind === 'role-to-approve')).toHaveLength(1);
    must(await decide(id));
    expect(await rolesOf(person)).toEqual(['operator']);
    expect(await listWaitingRoles(database.db, fixtures.siteId)).toEqual([]);
    const [grant] = await listGrants(database.db, person.id);
    expect(grant).toMatchObject({
      role: 'operator',
      reason: 'Joins the dock team',
      requestedByName: 'Person administrator',
      grantedByName: 'Person approver',
      endedAt: null
    });
    const [request] = await database.ownerSql`select signature_id from role_requests where id = ${id}`;
    expect(await verifySignature(database.db, String(request.signature_id))).toMatchObject({ valid: true });
    const rows =
      await database.ownerSql`select action from trail_entries where record_id = ${person.id} order by id`;
    expect(rows.map((row) => row.action)).toEqual(['role.request', 'role.grant']);
  });

  test('declined, it is not held and can be asked for again', async () => {
    const person = await somebody();
    const { id } = must(await ask(person.id, 'operator'));
    must(await decide(id, people.approver, { outcome: 'declined' }));
    expect(await rolesOf(person)).toEqual([]);
    await expectNothing(decide(id), {
      code: 'wrong-state',
      detail: expect.stringContaining('declined already')
    });
    expect(await ask(person.id, 'operator')).toMatchObject({ ok: true });
  });

  test('asking is for administrators, deciding for approvers', async () => {
    const person = await somebody();
    for (const role of ROLE_IDS.filter((one) => one !== 'administrator'))
      await expectNothing(ask(person.id, 'operator', people[role]), { code: 'not-allowed' });
    const { id } = must(await ask(person.id, 'operator'));
    for (const role of ROLE_IDS.filter((one) => one !== 'approver'))
      await expectNothing(decide(id, people[role]), { code: 'not-allowed' });
  });

  test('neither who asked nor who receives decides, not by raw SQL either', async () => {
    const approver = await somebody(['approver']);
    const { id } = must(await ask(approver.id, 'operator'));
    await expectNothing(decide(id, approver), { code: 'own-work' });
    // Who was an administrator when asking, and is an approver now.
    const mover = await somebody(['approver']);
    await database.ownerSql`update role_requests set requested_by = ${mover.id} where id = ${id}`;
    await expectNothing(decide(id, mover), { code: 'own-work' });
    const forced = sql`update role_requests set outcome = 'granted', decided_by = ${approver.id}, decided_by_name = 'x',
      decision_reason = 'x', decided_at = now(), signature_id = (select id from signatures limit 1) where id = ${id}`;
    await expect(database.db.execute(forced)).rejects.toMatchObject({ cause: { code: '23514' } });
  });

  test('a wrong password, no reason, an unknown request grant nothing', async () => {
    const person = await somebody();
    const { id } = must(await ask(person.id, 'operator'));
    const other = await somebody(['approver']);
    await expectNothing(decide(id, other, { password: 'not it at all, no' }), { code: 'signature-wrong' });
    await expectNothing(decide(id, other, { reason: ' ' }), { code: 'bad-input' });
    await expectNothing(decide(randomUUID(), other), { code: 'not-found' });
    expect(await rolesOf(person)).toEqual([]);
  });

  test('a role held, asked for already, without a reason, or for nobody is not asked for', async () => {
    const person = await somebody(['operator']);
    await expectNothing(ask(person.id, 'operator'), { code: 'already-exists' });
    must(await ask(person.id, 'method_owner'));
    await expectNothing(ask(person.id, 'method_owner'), { code: 'already-exists' });
    await expectNothing(ask(person.id, 'approver', people.administrator, 'x'), { code: 'bad-input' });
    await expectNothing(ask(randomUUID(), 'operator'), { code: 'not-found' });
  });

  test('an account that is not active receives none, asked before or after', async () => {
    const person = await somebody();
    const { id } = must(await ask(person.id, 'operator'));
    must(await setAccountStatus(database.db, people.administrator.act, person.id, 'suspended', 'On leave'));
    await expectNothing(ask(person.id, 'method_owner'), { code: 'wrong-state' });
    await expectNothing(decide(id), { code: 'wrong-state' });
  });
});

describe('R-004: roles that are never held together', () => {
  test('an administrator has no part in the work, an auditor none in anything else', () => {
    const clashing = ROLE_IDS.flatMap((held) =>
      ROLE_IDS.filter((wanted) => wanted !== held && roleConflict([held], wanted)).map((wanted) =>
        [held, wanted].sort().join('+')
      )
    );
    // REQUIREMENTS section 3, static conflicts: the administrator with each of the work's roles, the auditor with any.
    expect([...new Set(clashing)].sort()).toEqual([
      'administrator+approver',
      'administrator+auditor',
      'administrator+method_owner',
      'administrator+operator',
      'approver+auditor',
      'auditor+method_owner',
      'auditor+operator'
    ]);
  });

  test.each([
    ['administrator', 'operator'],
    ['administrator', 'approver'],
    ['operator', 'administrator'],
    ['auditor', 'approver'],
    ['method_owner', 'auditor']
  ] as const)('%s is refused %s with a sentence', async (held, wanted) => {
    const person = await somebody([held]);
    await expectNothing(ask(person.id, wanted), {
      code: 'wrong-state',
      detail: expect.stringContaining('never held by the same person')
    });
  });

  test('an administrator cannot ask for a role of the work for themselves', () =>
    expectNothing(ask(people.administrator.id, 'approver'), { code: 'wrong-state' }));

  test('two requests that clash with one another cannot both be granted, decided at once or not', async () => {
    const person = await somebody();
    const requests = [
      must(await ask(person.id, 'administrator')),
      must(await ask(person.id, 'operator')),
      must(await ask(person.id, 'auditor'))
    ];
    const outcomes = await Promise.all(requests.map(({ id }) => decide(id)));
    expect(outcomes.filter((outcome) => outcome.ok)).toHaveLength(1);
    expect(await rolesOf(person)).toHaveLength(1);
  });
});

describe('R-006: a role ends at once', () => {
  test('by an administrator, with a reason; the history keeps it', async () => {
    const person = await somebody(['operator', 'method_owner']);
    must(await end(person.id, 'operator'));
    expect(await rolesOf(person)).toEqual(['method_owner']);
    const grant = (await listGrants(database.db, person.id)).find((row) => row.role === 'operator');
    expect(grant).toMatchObject({ endedByName: 'Person administrator', endReason: 'Moves on' });
    await expectNothing(end(person.id, 'operator'), { code: 'wrong-state' });
  });

  test('not by others, not without a reason, not for oneself, not for nobody', async () => {
    const person = await somebody(['operator']);
    await expectNothing(end(person.id, 'operator', people.approver), { code: 'not-allowed' });
    await expectNothing(end(person.id, 'operator', people.administrator, ' '), { code: 'bad-input' });
    await expectNothing(end(people.administrator.id, 'administrator'), { code: 'own-work' });
    await expectNothing(end(randomUUID(), 'operator'), { code: 'not-found' });
    expect(await rolesOf(person)).toEqual(['operator']);
  });

  test('the last active QA approver keeps the role, since nobody could grant it again', async () => {
    const other = await testDatabase();
    try {
      const alone = await makeFixtures(other.db);
      const { administrator, approver } = alone.people;
      const ending = { userId: approver.id, role: 'approver', reason: 'Moves on' } as const;
      expect(await endRole(other.db, administrator.act, ending)).toMatchObject({
        ok: false,
        code: 'wrong-state',
        detail: expect.stringContaining('only active QA approver')
      });
      await alone.addPerson('second', ['approver']);
      expect(await endRole(other.db, administrator.act, ending)).toMatchObject({ ok: true });
    } finally {
      await other.close();
    }
  });
});

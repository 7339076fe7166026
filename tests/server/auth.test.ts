import { eq, sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  LOCK_MINUTES,
  SESSION_ABSOLUTE_HOURS,
  SESSION_IDLE_MINUTES,
  SIGN_IN_ATTEMPTS
} from '$lib/domain/accounts';
import { apiTokens, outboxMails, roleGrants, sessions, trailEntries, users } from '$lib/server/db/schema';
import { readBearer } from '$lib/server/platform/apiTokens';
import { hashPassword, verifyPassword } from '$lib/server/platform/password';
import { endSession, newToken, openSession, tokenKey, touchSession } from '$lib/server/platform/sessions';
import { signInWithPassword, signOutToken } from '$lib/server/platform/signIn';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD, type Fixtures } from '../support/fixtures';

let base: TestDatabase;
let fixtures: Fixtures;

beforeAll(async () => {
  base = await testDatabase();
  fixtures = await makeFixtures(base.db);
});
afterAll(() => base.close());

const signIn = (userName: string, password = PASSWORD, more = {}) =>
  signInWithPassword(base.db, {
    userName,
    password,
    address: '192.0.2.7',
    userAgent: 'a browser',
    requestId: 'r',
    ...more
  });
const wrongly = (userName: string) => signIn(userName, 'a wrong one, long enough');
const actionsAbout = async (recordId: string) =>
  (
    await base.db
      .select()
      .from(trailEntries)
      .where(eq(trailEntries.recordId, recordId))
      .orderBy(trailEntries.id)
  ).map((row) => row.action);
/** Makes the account's sessions older, as if time had passed. */
const age = (userId: string, minutes: number) =>
  base.ownerSql`update sessions set last_seen_at = last_seen_at - make_interval(mins => ${minutes}), expires_at = expires_at - make_interval(mins => ${minutes}) where user_id = ${userId}`;

describe('signing in', () => {
  it('R-013, R-015: opens a session under a new token each time, and the table holds only its hash', async () => {
    const person = await fixtures.addPerson('arrives', ['operator']);
    const [first, second] = [await signIn('arrives'), await signIn('ARRIVES ')].map(String);
    expect(second).toBe('null');
    const third = await signIn('Arrives');
    expect(first).not.toBe(third);
    expect(Buffer.from(first, 'base64url')).toHaveLength(32);
    const rows = await base.db.select().from(sessions).where(eq(sessions.userId, person.id));
    expect(rows.map((row) => row.tokenHash)).toContain(tokenKey(first));
    expect(JSON.stringify(rows)).not.toContain(first);
    expect(await touchSession(base.db, first)).toMatchObject({
      person: {
        id: person.id,
        printedName: 'Person arrives',
        roles: ['operator'],
        timeZone: 'Europe/Lisbon',
        demo: false
      }
    });
    expect(await actionsAbout(person.id)).toContain('session.sign-in');
  });

  it('R-013: whoever fails is on the trail with the place it came from; a name that does not exist is not kept', async () => {
    const person = await fixtures.addPerson('fails', ['operator']);
    expect(await wrongly('fails')).toBeNull();
    expect(await actionsAbout(person.id)).toEqual(['session.sign-in-failed']);
    expect(await wrongly('my-password-in-the-wrong-field')).toBeNull();
    const unknown = await base.db.select().from(trailEntries).where(eq(trailEntries.recordId, 'unknown'));
    expect(unknown.at(-1)).toMatchObject({
      action: 'session.sign-in-failed',
      actorId: null,
      after: { address: '192.0.2.7' }
    });
    const all = await base.db.select({ content: trailEntries.content }).from(trailEntries);
    expect(JSON.stringify(all)).not.toMatch(/my-password-in-the-wrong-field|a wrong one|lantern/);
  });

  it.each(['suspended', 'left', 'locked'] as const)(
    'R-006: an account that is %s does not sign in',
    async (status) => {
      await fixtures.addPerson(`is-${status}`, ['operator'], { status });
      expect(await signIn(`is-${status}`)).toBeNull();
    }
  );

  it('an account that never had a password does not sign in with an empty one', async () => {
    await fixtures.addPerson('no-password-yet', ['operator'], { passwordHash: null });
    expect(await signIn('no-password-yet', '')).toBeNull();
    expect(await signIn('no-password-yet', 'null')).toBeNull();
  });
});

describe('R-011: guessing', () => {
  it(`${SIGN_IN_ATTEMPTS} wrong passwords lock the account for ${LOCK_MINUTES} minutes, tell the administrators, and then it opens again`, async () => {
    const person = await fixtures.addPerson('guessed', ['operator']);
    for (let attempt = 0; attempt < SIGN_IN_ATTEMPTS; attempt += 1)
      expect(await wrongly('guessed')).toBeNull();
    expect(await signIn('guessed')).toBeNull();
    expect((await actionsAbout(person.id)).filter((action) => action === 'account.locked')).toHaveLength(1);
    const mails = await base.db.select().from(outboxMails).where(eq(outboxMails.kind, 'account-locked'));
    expect(mails).toHaveLength(1);
    expect(mails[0]).toMatchObject({
      toUserId: fixtures.people.administrator.id,
      status: 'waiting',
      subject: 'Account guessed is locked'
    });
    await base.ownerSql`update users set locked_until = clock_timestamp() - interval '1 second' where id = ${person.id}`;
    expect(await signIn('guessed')).not.toBeNull();
  });

  it('parallel guesses do not share one count', async () => {
    const person = await fixtures.addPerson('stormed', ['operator']);
    await Promise.all(Array.from({ length: 20 }, () => wrongly('stormed')));
    expect(await signIn('stormed')).toBeNull();
    const actions = await actionsAbout(person.id);
    expect(actions.filter((action) => action === 'session.sign-in-failed')).toHaveLength(21);
    expect(actions).toContain('account.locked');
  });

  it('a right password in between begins the count anew', async () => {
    await fixtures.addPerson('clumsy', ['operator']);
    for (let round = 0; round < 3; round += 1) {
      await wrongly('clumsy');
      await wrongly('clumsy');
      expect(await signIn('clumsy')).not.toBeNull();
    }
  });

  it('R-011: known, locked, disabled and unknown names are answered alike, after the same time', async () => {
    await fixtures.addPerson('timed', ['operator'], { passwordHash: await hashPassword(PASSWORD) });
    const TRIES = 15;
    const times = { known: [] as number[], unknown: [] as number[] };
    for (let attempt = 0; attempt < TRIES; attempt += 1) {
      for (const [kind, name] of [
        ['known', 'timed'],
        ['unknown', 'nobody-of-that-name']
      ] as const) {
        await base.ownerSql`update users set failed_attempts = 0, locked_until = null where user_name = 'timed'`;
        const began = performance.now();
        expect(await wrongly(name)).toBeNull();
        times[kind].push(performance.now() - began);
      }
    }
    const median = (values: number[]) => [...values].sort((a, b) => a - b)[Math.floor(values.length / 2)];
    const gap = Math.abs(median(times.known) - median(times.unknown));
    console.log(
      `median answer: known ${median(times.known).toFixed(1)} ms, unknown ${median(times.unknown).toFixed(1)} ms`
    );
    expect(gap).toBeLessThan(5);
  });

  it('the decoy costs what a real password costs (a naive check would answer at once)', async () => {
    const stored = await hashPassword(PASSWORD);
    const time = async (run: () => Promise<unknown>) => {
      const samples: number[] = [];
      for (let index = 0; index < 9; index += 1) {
        const began = performance.now();
        await run();
        samples.push(performance.now() - began);
      }
      return samples.sort((a, b) => a - b)[4];
    };
    await verifyPassword(null, PASSWORD);
    const real = await time(() => verifyPassword(stored, 'a wrong one, long enough'));
    const decoy = await time(() => verifyPassword(null, 'a wrong one, long enough'));
    expect(decoy).toBeGreaterThan(real * 0.5);
    expect(decoy).toBeLessThan(real * 2);
  });
});

describe('a session', () => {
  it('R-015: a copied token is nothing after sign-out, in every copy', async () => {
    const person = await fixtures.addPerson('leaves', ['operator']);
    const token = String(await signIn('leaves'));
    const copy = token;
    await signOutToken(base.db, token, 'r');
    expect(await touchSession(base.db, copy)).toBeNull();
    expect((await actionsAbout(person.id)).at(-1)).toBe('session.sign-out');
    await signOutToken(base.db, token, 'r');
    expect((await actionsAbout(person.id)).filter((action) => action === 'session.sign-out')).toHaveLength(1);
  });

  it('R-006: dies at the next request when its account is disabled, and does not come back with it', async () => {
    const person = await fixtures.addPerson('disabled', ['operator']);
    expect(await touchSession(base.db, person.token)).not.toBeNull();
    await base.db.update(users).set({ status: 'suspended' }).where(eq(users.id, person.id));
    expect(await touchSession(base.db, person.token)).toBeNull();
  });

  it('a role that ends is gone at the next request', async () => {
    const person = await fixtures.addPerson('mover', ['operator', 'approver']);
    expect((await touchSession(base.db, person.token))?.person.roles).toEqual(['approver', 'operator']);
    await base.db
      .update(roleGrants)
      .set({ endedAt: sql`clock_timestamp()`, endReason: 'moved' })
      .where(sql`user_id = ${person.id} and role = 'approver'`);
    expect((await touchSession(base.db, person.token))?.person.roles).toEqual(['operator']);
  });

  it(`R-012: ends after ${SESSION_IDLE_MINUTES} minutes without a request, and lives on with requests`, async () => {
    const person = await fixtures.addPerson('idle', ['operator']);
    for (let visit = 0; visit < 4; visit += 1) {
      await age(person.id, SESSION_IDLE_MINUTES - 1);
      expect(await touchSession(base.db, person.token)).not.toBeNull();
    }
    await age(person.id, SESSION_IDLE_MINUTES + 1);
    expect(await touchSession(base.db, person.token)).toBeNull();
    expect(await touchSession(base.db, person.token)).toBeNull();
  });

  it(`R-012: ends after ${SESSION_ABSOLUTE_HOURS} hours in any case`, async () => {
    const person = await fixtures.addPerson('tireless', ['operator']);
    for (let minutes = 0; minutes < SESSION_ABSOLUTE_HOURS * 60 - 10; minutes += 10) await age(person.id, 10);
    await base.ownerSql`update sessions set last_seen_at = clock_timestamp() where user_id = ${person.id}`;
    expect(await touchSession(base.db, person.token)).not.toBeNull();
    await age(person.id, 10);
    expect(await touchSession(base.db, person.token)).toBeNull();
  });

  it('one session of several ends alone', async () => {
    const { id } = await fixtures.addPerson('two-tablets', ['operator']);
    const [one, two] = [await openSession(base.db, id, {}), await openSession(base.db, id, {})];
    expect(await endSession(base.db, tokenKey(one), 'lost')).toBe(true);
    expect(await endSession(base.db, tokenKey(one), 'lost')).toBe(false);
    expect(await touchSession(base.db, one)).toBeNull();
    expect(await touchSession(base.db, two)).not.toBeNull();
  });

  it('a token that we never gave out opens nothing, nor does a stolen row of the table', async () => {
    const person = await fixtures.addPerson('stolen-row', ['operator']);
    expect(await touchSession(base.db, newToken())).toBeNull();
    expect(await touchSession(base.db, tokenKey(person.token))).toBeNull();
    expect(await touchSession(base.db, '')).toBeNull();
  });
});

describe("an instrument's token", () => {
  it('stands for its owner within its scopes, and for nobody once revoked or its owner is gone', async () => {
    const owner = await fixtures.addPerson('answers-for-it', ['operator']);
    const token = newToken();
    const [row] = await base.db
      .insert(apiTokens)
      .values({
        name: 'PC at dock B',
        tokenHash: tokenKey(token),
        scopes: ['scan.record'],
        ownerId: owner.id
      })
      .returning();
    expect(await readBearer(base.db, token)).toMatchObject({
      scopes: ['scan.record'],
      person: { id: owner.id, roles: ['operator'] }
    });
    await base.db.update(users).set({ status: 'left' }).where(eq(users.id, owner.id));
    expect(await readBearer(base.db, token)).toBeNull();
    await base.db.update(users).set({ status: 'active' }).where(eq(users.id, owner.id));
    await base.db
      .update(apiTokens)
      .set({ revokedAt: sql`clock_timestamp()` })
      .where(eq(apiTokens.id, row.id));
    expect(await readBearer(base.db, token)).toBeNull();
  });
});

describe('R-009: passwords at rest', () => {
  it('are argon2id with their own salt, and verify exactly, in every way of writing an accent', async () => {
    const [one, two] = [
      await hashPassword('fa\u00e7ade of the old quay'),
      await hashPassword('fa\u00e7ade of the old quay')
    ];
    expect(one).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
    expect(one).not.toBe(two);
    expect(await verifyPassword(one, 'fac\u0327ade of the old quay')).toBe(true);
    expect(await verifyPassword(one, 'facade of the old quay')).toBe(false);
  });

  it('R-007: 64 characters of any script, and nothing is cut off', async () => {
    const long = 'ぬ'.repeat(63) + 'x';
    const stored = await hashPassword(long, { memoryKib: 64, passes: 1 });
    expect(await verifyPassword(stored, long)).toBe(true);
    expect(await verifyPassword(stored, 'ぬ'.repeat(63) + 'y')).toBe(false);
    expect(await verifyPassword(stored, 'ぬ'.repeat(63))).toBe(false);
  });
});

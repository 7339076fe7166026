import { createHash } from 'node:crypto';
import { eq, sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { containers, sites, trailEntries, users } from '$lib/server/db/schema';
import { databaseErrorCode, transact } from '$lib/server/db/transaction';
import { systemAct } from '$lib/server/platform/act';
import { recordTrail } from '$lib/server/platform/trail';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, type Fixtures } from '../support/fixtures';

let base: TestDatabase;
let fixtures: Fixtures;

beforeAll(async () => {
  base = await testDatabase();
  fixtures = await makeFixtures(base.db);
});
afterAll(() => base.close());

const entry = (recordId: string, more: object = {}) =>
  ({
    action: 'site.settings',
    recordType: 'site',
    recordId,
    recordLabel: `Site ${recordId}`,
    ...more
  }) as const;

async function entriesOf(recordId: string) {
  return base.db
    .select()
    .from(trailEntries)
    .where(eq(trailEntries.recordId, recordId))
    .orderBy(trailEntries.id);
}

describe('what an entry holds', () => {
  it('R-034: who and in which role, what before and after, when, why, and in which request', async () => {
    const { act } = fixtures.people.approver;
    await recordTrail(base.db, act, {
      action: 'lot.release',
      recordType: 'lot',
      recordId: 'six-parts',
      recordLabel: 'Lot L-2026-0001',
      before: { status: 'quarantine' },
      after: { status: 'released' },
      reason: 'every drum passed'
    });
    const [row] = await entriesOf('six-parts');
    expect(row).toMatchObject({
      actorId: act.actor.id,
      actorName: 'Person approver',
      actorRole: 'QA approver',
      action: 'lot.release',
      before: { status: 'quarantine' },
      after: { status: 'released' },
      reason: 'every drum passed',
      requestId: 'request of approver'
    });
    expect(Math.abs(row.at.getTime() - Date.now())).toBeLessThan(60_000);
  });

  it("time, transaction, content and hash are the database's, whatever the writer says", async () => {
    await base.db.insert(trailEntries).values({
      ...entry('forged'),
      actorName: 'Somebody',
      actorRole: 'none',
      at: new Date('2001-01-01T00:00:00Z'),
      xid: '7',
      content: 'nothing happened',
      contentHash: '00'
    });
    const [row] = await entriesOf('forged');
    expect(row.at.getFullYear()).toBeGreaterThan(2020);
    expect(row.xid).not.toBe('7');
    expect(JSON.parse(row.content)).toMatchObject({
      id: row.id,
      xid: row.xid,
      actorName: 'Somebody',
      recordLabel: 'Site forged'
    });
    expect(row.contentHash).toBe(createHash('sha256').update(row.content).digest('hex'));
  });

  it('an entry without a name is refused', async () => {
    for (const actorName of ['', '  ']) {
      const writing = base.db
        .insert(trailEntries)
        .values({ ...entry('nameless'), actorName, actorRole: 'none' });
      await expect(writing.catch((error: unknown) => databaseErrorCode(error))).resolves.toBe('23514');
    }
    expect(await entriesOf('nameless')).toHaveLength(0);
  });

  it('a service acts under its own name and version, and under no account', async () => {
    await recordTrail(base.db, systemAct('Sealer 0.1.0'), entry('by-service'));
    const [row] = await entriesOf('by-service');
    expect(row).toMatchObject({ actorId: null, actorName: 'Sealer 0.1.0', actorRole: 'system' });
  });
});

describe('change and entry together', () => {
  const rename = (name: string, recordId: string, fails: boolean) =>
    transact(base.db, async (tx) => {
      await tx.update(sites).set({ name }).where(eq(sites.id, fixtures.siteId));
      await recordTrail(tx, fixtures.people.administrator.act, entry(recordId, { after: { name } }));
      if (fails) throw new Error('power cut');
    });

  it('R-036: a change that is rolled back leaves no entry, and one that is kept leaves one', async () => {
    await expect(rename('Lost Works', 'rolled-back', true)).rejects.toThrow('power cut');
    expect(await entriesOf('rolled-back')).toHaveLength(0);
    await rename('Kept Works', 'kept', false);
    expect(await entriesOf('kept')).toHaveLength(1);
    const [site] = await base.db.select().from(sites);
    expect(site.name).toBe('Kept Works');
  });

  it('R-036: an entry that cannot be written takes its change back with it', async () => {
    const nameless = systemAct('');
    const saving = transact(base.db, async (tx) => {
      await tx.update(sites).set({ name: 'Unrecorded Works' }).where(eq(sites.id, fixtures.siteId));
      await recordTrail(tx, nameless, entry('unrecorded'));
    });
    await expect(saving).rejects.toThrow();
    const [site] = await base.db.select().from(sites);
    expect(site.name).not.toBe('Unrecorded Works');
  });

  it('R-037: after k changes every earlier value can be read from the trail', async () => {
    const names = ['North Works', 'East Works', 'South Works'];
    let before = 'Harbour Works';
    for (const name of names) {
      await recordTrail(
        base.db,
        fixtures.people.administrator.act,
        entry('versions', { before: { name: before }, after: { name } })
      );
      before = name;
    }
    const rows = await entriesOf('versions');
    const versions = [rows[0].before?.name, ...rows.map((row) => row.after?.name)];
    expect(versions).toEqual(['Harbour Works', ...names]);
  });

  it('R-038: forty acts in one transaction are forty entries, in true time and order', async () => {
    await transact(base.db, async (tx) => {
      for (let drum = 1; drum <= 40; drum += 1)
        await recordTrail(tx, fixtures.people.operator.act, entry('forty', { after: { drum } }));
    });
    const rows = await base.db.execute<{ at: string; drum: number }>(
      sql`select at::text as at, (after->>'drum')::int as drum from trail_entries where record_id = 'forty' order by id`
    );
    expect(rows.map((row) => row.drum)).toEqual(Array.from({ length: 40 }, (_, index) => index + 1));
    expect(new Set(rows.map((row) => row.at)).size).toBe(40);
    expect([...rows.map((row) => row.at)].sort()).toEqual(rows.map((row) => row.at));
  });
});

describe('transactions', () => {
  it('a transaction that the server could not order runs again', async () => {
    let runs = 0;
    const result = await transact(base.db, async (tx) => {
      runs += 1;
      if (runs < 3)
        await tx.execute(
          sql`do $$ begin raise exception 'in the way' using errcode = 'serialization_failure'; end $$`
        );
      return 'kept';
    });
    expect([result, runs]).toEqual(['kept', 3]);
  });

  it('it gives up after three more tries, and runs nothing twice that failed for another reason', async () => {
    let runs = 0;
    const failing = (code: string) =>
      transact(base.db, async (tx) => {
        runs += 1;
        await tx.execute(
          sql.raw(`do $$ begin raise exception 'in the way' using errcode = '${code}'; end $$`)
        );
      });
    await expect(failing('40P01')).rejects.toThrow();
    expect(runs).toBe(4);
    runs = 0;
    await expect(failing('23505')).rejects.toThrow();
    expect(runs).toBe(1);
  });
});

describe('accounts and records that never go', () => {
  it('R-006: an account cannot be deleted, nor its user name changed, by anybody', async () => {
    const { id } = fixtures.people.operator;
    await expect(base.ownerSql`delete from users where id = ${id}`).rejects.toThrow('never removed');
    await expect(base.ownerSql`update users set user_name = 'another' where id = ${id}`).rejects.toThrow(
      'never change'
    );
    const [row] = await base.db.select({ name: users.printedName }).from(users).where(eq(users.id, id));
    expect(row.name).toBe('Person operator');
  });

  it("the application's role cannot delete containers at all", async () => {
    await expect(
      base.db.delete(containers).catch((error: unknown) => databaseErrorCode(error))
    ).resolves.toBe('42501');
  });
});

import postgres from 'postgres';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { closeDatabase, connect } from '$lib/server/db/client';
import { startBackground } from '$lib/server/platform/startup';
import { APPEND_ONLY, missingWalls } from '$lib/server/platform/walls';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures } from '../support/fixtures';

/** PostgreSQL's "insufficient privilege", and what the triggers raise. */
const NO_PRIVILEGE = '42501';
const RESTRICTED = '23001';

let base: TestDatabase;
let app: postgres.Sql;

beforeAll(async () => {
  base = await testDatabase();
  await makeFixtures(base.db);
  app = postgres(base.appUrl, { max: 1, onnotice: () => {} });
});
afterAll(async () => {
  await app.end();
  await base.close();
});

const codeOf = (running: Promise<unknown>) =>
  running.then(
    () => 'done',
    (error: { code?: string }) => error.code
  );

describe("R-035: the application's role", () => {
  it.each([...APPEND_ONLY])('may not change, remove or empty %s', async (table) => {
    const [column] = await base.ownerSql<{ name: string }[]>`
      select column_name as name from information_schema.columns where table_name = ${table} and is_identity = 'NO' limit 1`;
    expect(await codeOf(app.unsafe(`update ${table} set "${column.name}" = "${column.name}"`))).toBe(
      NO_PRIVILEGE
    );
    expect(await codeOf(app.unsafe(`delete from ${table}`))).toBe(NO_PRIVILEGE);
    expect(await codeOf(app.unsafe(`truncate ${table} cascade`))).toBe(NO_PRIVILEGE);
  });

  it.each([
    ['drop the table', 'drop table trail_entries'],
    ['drop a trigger', 'drop trigger append_only on trail_entries'],
    ['switch a trigger off', 'alter table trail_entries disable trigger append_only'],
    ['switch all triggers off', 'alter table trail_entries disable trigger all'],
    [
      "replace the trigger's function",
      `create or replace function write_trail_entry() returns trigger language plpgsql as 'begin return new; end'`
    ],
    ['switch triggers off for its session', 'set session_replication_role = replica'],
    ['turn into the owner', 'set role postgres'],
    ['wind back the numbers', `select setval('trail_entries_id_seq', 1)`],
    ['make objects that hide ours', 'create table public.signatures_2 (id int)']
  ])('may not %s', async (_what, statement) => {
    expect(await codeOf(app.unsafe(statement))).toBe(NO_PRIVILEGE);
  });

  it('gains nothing by granting itself a privilege', async () => {
    await app`grant update on trail_entries to wharfinger_app`;
    expect(await codeOf(app`update trail_entries set reason = 'agreed'`)).toBe(NO_PRIVILEGE);
  });

  it('cannot hide a table behind a temporary one of the same name from the triggers', async () => {
    await base.ownerSql`grant temporary on database ${base.ownerSql(new URL(base.ownerUrl).pathname.slice(1))} to wharfinger_app`;
    const [lot] = await app<{ id: string }[]>`select gen_random_uuid() as id`;
    await app`create temporary table signatures (id uuid, signer_id uuid, record_type text, record_id text)`;
    await app`insert into pg_temp.signatures values (${lot.id}, ${lot.id}, 'lot', ${lot.id})`;
    await expect(
      app`insert into dispositions (lot_id, outcome, reason, signature_id) values (${lot.id}, 'release', 'x', ${lot.id})`
    ).rejects.toThrow('of another record');
    await app`drop table pg_temp.signatures`;
  });

  it('may not change what a lot, container or account is, only what becomes of it', async () => {
    expect(await codeOf(app`update lots set lot_number = lot_number`)).toBe(NO_PRIVILEGE);
    expect(await codeOf(app`update containers set barcode = barcode`)).toBe(NO_PRIVILEGE);
    expect(await codeOf(app`update sessions set user_id = user_id`)).toBe(NO_PRIVILEGE);
    expect(await codeOf(app`update role_grants set role = 'approver'`)).toBe(NO_PRIVILEGE);
    expect(await codeOf(app`delete from users`)).toBe(NO_PRIVILEGE);
    expect(await codeOf(app`delete from deliveries`)).toBe(NO_PRIVILEGE);
    expect(await codeOf(app`delete from lots`)).toBe(NO_PRIVILEGE);
  });

  it("has no right to remove rows but of drafts' references and saved filters", async () => {
    const rows = await base.ownerSql<{ name: string }[]>`
      select c.relname as name from pg_class c join pg_namespace n on n.oid = c.relnamespace
      where n.nspname = 'public' and c.relkind = 'r' and has_table_privilege('wharfinger_app', c.oid, 'DELETE') order by 1`;
    expect(rows.map((row) => row.name)).toEqual(['method_version_references', 'saved_filters']);
  });
});

describe("R-035: the tables' owner", () => {
  it.each([...APPEND_ONLY])(
    'is stopped by triggers from changing, removing or emptying %s',
    async (table) => {
      expect(await codeOf(base.ownerSql.unsafe(`truncate ${table} cascade`))).toBe(RESTRICTED);
      const [{ row }] = await base.ownerSql<{ row: boolean }[]>`
      select count(*) = 1 as row from pg_trigger where tgrelid = ${table}::regclass and tgname = 'append_only' and tgenabled = 'A'
        and tgtype & 1 = 1 and tgtype & 2 = 2 and tgtype & 8 = 8 and tgtype & 16 = 16`;
      expect(row).toBe(true);
    }
  );

  it('changes no entry even in a session that has its triggers in replica mode', async () => {
    await app`insert into trail_entries (actor_name, actor_role, action, record_type, record_id, record_label)
      values ('Somebody', 'none', 'system.start', 'site', '1', 'Site')`;
    const attempt = base.ownerSql.begin(async (owner) => {
      await owner`set local session_replication_role = replica`;
      await owner`update trail_entries set actor_name = 'Nobody'`;
    });
    expect(await codeOf(attempt)).toBe(RESTRICTED);
    expect(await codeOf(base.ownerSql`delete from trail_entries`)).toBe(RESTRICTED);
  });
});

describe('R-035, R-131: the start', () => {
  it("finds nothing missing as the application's role", async () => {
    expect(await missingWalls(base.db)).toEqual([]);
  });

  it('R-131: refuses the owner', async () => {
    const owner = connect(base.ownerUrl, { max: 1 });
    expect((await missingWalls(owner.db)).join(' ')).toMatch(/superuser|owns the audit trail/);
    await owner.close();
  });

  it('R-131: the application itself does not start as the owner, and says why', async () => {
    process.env.DATABASE_URL = base.ownerUrl;
    try {
      await expect(startBackground()).rejects.toThrow(/does not start.*(superuser|owns the audit trail)/);
    } finally {
      await closeDatabase();
      delete process.env.DATABASE_URL;
    }
  });

  it('R-131: refuses a role that owns the trail without being a superuser', async () => {
    await base.ownerSql.begin(async (owner) => {
      await owner`grant create on schema public to wharfinger_app`;
      await owner`alter table trail_entries owner to wharfinger_app`;
    });
    expect((await missingWalls(base.db)).join(' ')).toContain('owns the audit trail');
    await base.ownerSql`alter table trail_entries owner to current_user`;
    await base.ownerSql`revoke create on schema public from wharfinger_app`;
    await base.ownerSql`revoke all on trail_entries from wharfinger_app`;
    await base.ownerSql`grant select, insert on trail_entries to wharfinger_app`;
  });

  it.each([
    [
      'alter table trail_entries disable trigger append_only',
      'alter table trail_entries enable always trigger append_only',
      'trail_entries.append_only'
    ],
    [
      'alter table scans enable trigger never_emptied',
      'alter table scans enable always trigger never_emptied',
      'scans.never_emptied'
    ],
    [
      'alter table trail_entries disable trigger write_entry',
      'alter table trail_entries enable always trigger write_entry',
      'trail_entries.write_entry'
    ],
    [
      'alter table lots disable trigger check_status',
      'alter table lots enable always trigger check_status',
      'lots.check_status'
    ]
  ])('R-035: names a trigger that is off: %s', async (off, on, name) => {
    await base.ownerSql.unsafe(off);
    expect(await missingWalls(base.db)).toEqual([`The trigger ${name} is missing or switched off.`]);
    await base.ownerSql.unsafe(on);
    expect(await missingWalls(base.db)).toEqual([]);
  });

  it('notices a privilege that came back', async () => {
    await base.ownerSql`grant update on trail_entries to wharfinger_app`;
    expect((await missingWalls(base.db)).join(' ')).toContain('may change or empty');
    await base.ownerSql`revoke update on trail_entries from wharfinger_app`;
  });
});

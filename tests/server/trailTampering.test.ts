import { generateKeyPairSync } from 'node:crypto';
import { copyFileSync, mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Sql } from 'postgres';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { GrowingTree } from '$lib/domain/growingTree';
import { leafHash } from '$lib/domain/merkleTree';
import { systemAct } from '$lib/server/platform/act';
import { hex, sealNow, sha256 } from '$lib/server/platform/sealer';
import { recordTrail } from '$lib/server/platform/trail';
import { trailKeyFrom, type TrailKey } from '$lib/server/platform/trailKey';
import { verifyTrail } from '$lib/server/platform/verifyTrail';
import { testDatabase, type TestDatabase } from '../support/database';

/**
 * What the owner of the database, with every trigger switched off, could do to the trail. Eleven
 * entries, sealed in three heads: of 4, 8 and 11.
 */
const key = trailKeyFrom(generateKeyPairSync('ed25519').privateKey);
const act = systemAct('Test of tampering');
let base: TestDatabase;
let folder: string;
let headsFile: string;
/** Numbers of the entries, in order. */
let ids: number[];

beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), 'wharfinger-tamper-'));
});
afterAll(() => rmSync(folder, { recursive: true }));

beforeEach(async () => {
  base = await testDatabase();
  headsFile = join(folder, `${crypto.randomUUID()}.ndjson`);
  ids = [];
  for (let n = 0; n < 11; n += 1) {
    ids.push(
      await recordTrail(base.db, act, {
        action: 'scan.record',
        recordType: 'scan',
        recordId: `scan ${n}`,
        recordLabel: `Container ${n}`,
        after: { verdict: n === 5 ? 'fail' : 'pass' }
      })
    );
    if (n === 3 || n === 7 || n === 10) await sealNow(base.db, { key, headsFile });
  }
});
afterEach(() => base.close());

const TABLES = ['trail_entries', 'trail_leaves', 'trail_nodes', 'tree_heads'];

/** Acts as the owner with the walls down, and puts them up again. */
async function tamper(work: (owner: Sql) => Promise<unknown>): Promise<void> {
  for (const table of TABLES) await base.ownerSql.unsafe(`alter table ${table} disable trigger user`);
  await work(base.ownerSql);
  for (const table of TABLES) await base.ownerSql.unsafe(`alter table ${table} enable trigger user`);
}

const verifyOutside = () => verifyTrail(base.db, { headsFile });
const verifyInside = () => verifyTrail(base.db, { headsFile: null, keys: [key.publicKey] });

/** Content and hash as the trigger would make them, for whoever rewrites an entry with care. */
const rewriteContent = (owner: Sql) => owner`
  update trail_entries e set content = c.content, content_hash = encode(sha256(convert_to(c.content, 'UTF8')), 'hex')
  from (select id, jsonb_build_object('id', id, 'xid', xid::text, 'at', to_char(at at time zone 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.US"Z"'),
    'actorId', actor_id, 'actorName', actor_name, 'actorRole', actor_role, 'action', action, 'recordType', record_type,
    'recordId', record_id, 'recordLabel', record_label, 'lotId', lot_id, 'before', before, 'after', after, 'reason', reason,
    'requestId', request_id)::text as content from trail_entries) c where c.id = e.id`;

/** The whole tree made anew over the entries as they are, its heads signed with the key given. */
async function rewriteTree(owner: Sql, signedWith: TrailKey): Promise<void> {
  await owner`delete from trail_leaves`;
  await owner`delete from trail_nodes`;
  const sizes = (await owner<{ size: string }[]>`delete from tree_heads returning size`).map((row) =>
    Number(row.size)
  );
  const tree = new GrowingTree(sha256);
  for (const { id, content } of await owner<
    { id: string; content: string }[]
  >`select id, content from trail_entries order by id`) {
    const leaf = leafHash(sha256, Buffer.from(content));
    await owner`insert into trail_leaves (leaf_index, entry_id, leaf_hash) values (${tree.size}, ${id}, ${hex(leaf)})`;
    for (const node of tree.append(leaf)) {
      await owner`insert into trail_nodes (level, node_index, hash) values (${node.level}, ${node.index}, ${hex(node.hash)})`;
    }
    if (!sizes.includes(tree.size)) continue;
    const head = signedWith.signHead(tree.size, hex(tree.root()), new Date().toISOString());
    await owner`insert into tree_heads (size, root_hash, at, key_id, signature)
      values (${head.size}, ${head.rootHash}, ${head.at}, ${head.keyId}, ${head.signature})`;
  }
}

describe('nothing done', () => {
  it('an untouched trail verifies, against heads from outside and without', async () => {
    expect(await verifyOutside()).toMatchObject({
      ok: true,
      sealed: 11,
      unsealed: 0,
      heads: 3,
      outsideHeads: 3,
      faults: []
    });
    expect(await verifyInside()).toMatchObject({ ok: true, sealed: 11, outsideHeads: 0 });
  });
});

describe('one entry', () => {
  it.each([
    ['a name', `actor_name = 'Somebody else'`],
    ['a value', `after = '{"verdict": "pass"}'`],
    ['a reason put in', `reason = 'agreed'`],
    ['the time, by a microsecond', `at = at + interval '1 microsecond'`],
    ['the content', `content = replace(content, 'fail', 'pass')`],
    [
      'the content and its hash',
      `content = replace(content, 'fail', 'pass'), content_hash = encode(sha256(convert_to(replace(content, 'fail', 'pass'), 'UTF8')), 'hex')`
    ],
    ['the hash', `content_hash = repeat('0', 64)`]
  ])('a change of %s is found, and the entry named', async (_what, change) => {
    await tamper((owner) => owner.unsafe(`update trail_entries set ${change} where id = ${ids[5]}`));
    const found = await verifyInside();
    expect(found.ok).toBe(false);
    expect(found.faults[0]).toMatchObject({
      kind: 'changed',
      entryId: ids[5],
      sentence: expect.stringContaining(`Entry ${ids[5]} `)
    });
  });

  it('a change of columns, content and hash together is found by the leaf', async () => {
    await tamper(async (owner) => {
      await owner`update trail_entries set after = '{"verdict": "pass"}' where id = ${ids[5]}`;
      await rewriteContent(owner);
    });
    expect((await verifyInside()).faults[0]).toMatchObject({ kind: 'changed', entryId: ids[5] });
  });

  it('a change that rewrites its leaf too is found by the tree, to the pair of leaves', async () => {
    await tamper(async (owner) => {
      await owner`update trail_entries set after = '{"verdict": "pass"}' where id = ${ids[5]}`;
      await rewriteContent(owner);
      await owner`update trail_leaves l set leaf_hash = encode(sha256('\\x00'::bytea || convert_to(e.content, 'UTF8')), 'hex')
        from trail_entries e where e.id = l.entry_id`;
    });
    const [fault] = (await verifyInside()).faults;
    expect(fault.sentence).toContain(`leaves 4 to 5 stand the entries ${ids[4]}, ${ids[5]}`);
  });

  it('a deleted entry is found and named', async () => {
    await tamper((owner) => owner`delete from trail_entries where id = ${ids[5]}`);
    expect((await verifyInside()).faults[0]).toMatchObject({ kind: 'deleted', entryId: ids[5] });
  });

  it('an entry deleted with its leaf is found, between which it was', async () => {
    await tamper(async (owner) => {
      await owner`delete from trail_entries where id = ${ids[5]}`;
      await owner`delete from trail_leaves where entry_id = ${ids[5]}`;
    });
    const { faults } = await verifyInside();
    expect(faults.map((fault) => fault.sentence).join(' ')).toContain(`after entry ${ids[4]} was deleted`);
  });

  it('an entry deleted with the leaves moved up is found by the tree', async () => {
    await tamper(async (owner) => {
      await owner`delete from trail_entries where id = ${ids[5]}`;
      await owner`delete from trail_leaves where entry_id = ${ids[5]}`;
      for (let index = 6; index < 11; index += 1)
        await owner`update trail_leaves set leaf_index = ${index - 1} where leaf_index = ${index}`;
    });
    expect((await verifyInside()).faults[0]).toMatchObject({
      kind: 'reordered',
      sentence: expect.stringContaining('leaves 4 to 5')
    });
  });

  it('two entries with their numbers exchanged are found', async () => {
    await tamper(async (owner) => {
      await owner`update trail_leaves set entry_id = -1 where entry_id = ${ids[2]}`;
      await owner`update trail_leaves set entry_id = ${ids[2]} where entry_id = ${ids[8]}`;
      await owner`update trail_leaves set entry_id = ${ids[8]} where entry_id = -1`;
    });
    expect((await verifyInside()).faults[0]).toMatchObject({ kind: 'changed', entryId: ids[8] });
  });

  it('two entries exchanged with leaf and hash are found by the tree', async () => {
    await tamper(async (owner) => {
      await owner`update trail_leaves set leaf_index = -1 where leaf_index = 2`;
      await owner`update trail_leaves set leaf_index = 2 where leaf_index = 8`;
      await owner`update trail_leaves set leaf_index = 8 where leaf_index = -1`;
    });
    expect((await verifyInside()).faults[0]).toMatchObject({
      kind: 'reordered',
      sentence: expect.stringContaining('leaves 2 to 3')
    });
  });
});

describe('an entry put in', () => {
  const insertBackdated = (owner: Sql, at: string) => owner`
    insert into trail_entries (xid, at, actor_name, actor_role, action, record_type, record_id, record_label)
    values ('3', ${at}, 'Person approver', 'QA approver', 'lot.release', 'lot', '1', 'Lot L-2026-0001')`;

  it('without content is found before it is sealed', async () => {
    await tamper((owner) => insertBackdated(owner, '2026-01-01T00:00:00Z'));
    expect((await verifyInside()).faults[0]).toMatchObject({ kind: 'changed', entryId: ids[10] + 1 });
  });

  it('with everything right but its time is found waiting for a seal, and, once sealed, by its time', async () => {
    await tamper(async (owner) => {
      await insertBackdated(owner, '2026-01-01T00:00:00Z');
      await rewriteContent(owner);
    });
    expect((await verifyInside()).faults[0]).toMatchObject({ kind: 'unsealed', entryId: ids[10] + 1 });
    // As after a restart, which looks at everything that has no leaf.
    const restarted = await testDatabaseView();
    await sealNow(restarted.db, { key, headsFile });
    await restarted.close();
    expect((await verifyInside()).faults[0]).toMatchObject({ kind: 'slipped-in', entryId: ids[10] + 1 });
  });

  const testDatabaseView = async () => {
    const { connect } = await import('$lib/server/db/client');
    return connect(base.appUrl);
  };
});

describe('heads', () => {
  it('a head with another root or size is not signed', async () => {
    await tamper((owner) => owner`update tree_heads set root_hash = repeat('a', 64) where size = 8`);
    const { faults } = await verifyInside();
    expect(faults[0]).toMatchObject({ kind: 'head', sentence: expect.stringContaining('of 8 entries') });
  });

  it("heads signed with a key of the tamperer's own are found", async () => {
    const own = trailKeyFrom(generateKeyPairSync('ed25519').privateKey);
    await tamper((owner) => rewriteTree(owner, own));
    expect((await verifyInside()).faults[0]).toMatchObject({
      kind: 'head',
      sentence: expect.stringContaining('not signed by a known key')
    });
  });
});

describe('what only a head from outside can find', () => {
  const cutAfter8 = () =>
    tamper(async (owner) => {
      await owner`delete from trail_entries where id > ${ids[7]}`;
      await owner`delete from trail_leaves where leaf_index >= 8`;
      await owner`delete from trail_nodes n where (n.node_index + 1) * power(2, n.level + 1) > 8`;
      await owner`delete from tree_heads where size > 8`;
    });

  it('R-160: a tail cut off with its leaves, nodes and heads', async () => {
    await cutAfter8();
    expect(await verifyInside()).toMatchObject({ ok: true, sealed: 8, outsideHeads: 0 });
    expect((await verifyInside()).sentence).toContain('a cut end could not be seen');
    const found = await verifyOutside();
    expect(found.faults[0]).toMatchObject({
      kind: 'cut',
      sentence: expect.stringContaining('tells of 11 entries, here are 8')
    });
  });

  it('R-160: a cut tail that has grown again past its old length', async () => {
    await cutAfter8();
    const grown = join(folder, `${crypto.randomUUID()}.ndjson`);
    for (let n = 0; n < 5; n += 1) {
      await recordTrail(base.db, act, {
        action: 'scan.record',
        recordType: 'scan',
        recordId: 'other',
        recordLabel: 'Another story'
      });
    }
    await sealNow(base.db, { key, headsFile: grown });
    expect((await verifyInside()).ok).toBe(true);
    expect((await verifyOutside()).faults[0]).toMatchObject({
      kind: 'range',
      sentence: expect.stringContaining('leaves 8 to 10')
    });
  });

  it('R-160: everything rewritten, tree and heads too, with the stolen key', async () => {
    await tamper(async (owner) => {
      await owner`update trail_entries set after = '{"verdict": "pass"}' where id = ${ids[5]}`;
      await rewriteContent(owner);
      await rewriteTree(owner, key);
    });
    expect((await verifyInside()).ok).toBe(true);
    expect((await verifyOutside()).faults[0]).toMatchObject({
      kind: 'range',
      sentence: expect.stringContaining('leaves 4 to 7')
    });
  });

  it('an old state of the database put back', async () => {
    const copy = join(folder, 'copy.ndjson');
    copyFileSync(headsFile, copy);
    await cutAfter8();
    expect((await verifyTrail(base.db, { headsFile: copy })).ok).toBe(false);
  });
});

import { createHash } from 'node:crypto';
import { and, asc, desc, inArray, sql } from 'drizzle-orm';
import { edgeOf, GrowingTree, type TreeNode } from '../../domain/growingTree';
import { leafHash, type Hash } from '../../domain/merkleTree';
import type { Database, Executor, Transaction } from '../db/client';
import { trailEntries, trailLeaves, trailNodes, treeHeads } from '../db/schema';
import { transact } from '../db/transaction';
import { trailHeadsFile } from './env';
import { appendHeads, readHeads } from './headsFile';
import { log } from './log';
import { trailKey, type TrailKey, type TreeHead } from './trailKey';

/** Whoever seals holds this lock until its transaction ends: any number, the same in every process. */
const SEAL_LOCK = 7_241_991;
const CHUNK = 2000;
/** An entry that waits longer than this for its seal is an alarm. */
const ALARM_MS = 5000;

export const sha256 = (bytes: Uint8Array): Hash => createHash('sha256').update(bytes).digest();
export const hex = (hash: Hash): string => Buffer.from(hash).toString('hex');

export interface SealOptions {
  readonly key?: TrailKey;
  /** File outside the database to append heads to; otherwise TRAIL_HEADS_FILE. */
  readonly headsFile?: string;
}

/** Below this transaction id everything is sealed, as far as this process has seen. */
const sealedBelow = new WeakMap<Database, string>();

/**
 * Seals every entry whose transaction is certainly over: below the oldest one still running
 * (pg_snapshot_xmin), since numbers are given early and commit in any order. In order of their numbers they
 * become the next leaves; the new tree's head is signed, stored, and appended to the file outside. An entry with
 * a transaction id from the future can be seen only in a database restored from another server, and is over too.
 *
 * Returns the current head, or null while nothing was ever sealed. Entries of the caller's own open transaction
 * are not sealed by it.
 */
export async function sealNow(db: Database, options: SealOptions = {}): Promise<TreeHead | null> {
  return (await seal(db, options, true))?.head ?? null;
}

async function seal(
  db: Database,
  options: SealOptions,
  wait: boolean
): Promise<{ head: TreeHead | null } | null> {
  const key = options.key ?? trailKey();
  const sealed = await transact(db, async (tx) => {
    if (!(await takeLock(tx, wait))) return null;
    const last = await latestHead(tx);
    const { ids, xmin } = await settledEntries(tx, sealedBelow.get(db) ?? '0');
    const head = ids.length === 0 ? last : await appendEntries(tx, last?.size ?? 0, ids, key);
    return { head, xmin, isNew: ids.length > 0 };
  });
  if (!sealed) return null;
  sealedBelow.set(db, sealed.xmin);
  const file = options.headsFile ?? trailHeadsFile();
  // After the commit: a head outside of a tree that never came to be would read as tampering.
  if (sealed.isNew && sealed.head && file)
    await appendHeads(file, [{ ...sealed.head, publicKey: key.publicKey }]);
  return { head: sealed.head };
}

async function takeLock(tx: Transaction, wait: boolean): Promise<boolean> {
  if (wait) {
    await tx.execute(sql`select pg_advisory_xact_lock(${SEAL_LOCK})`);
    return true;
  }
  const [{ taken }] = await tx.execute<{ taken: boolean }>(
    sql`select pg_try_advisory_xact_lock(${SEAL_LOCK}) as taken`
  );
  return taken;
}

/** The newest signed head, or null. */
export async function latestHead(db: Executor): Promise<TreeHead | null> {
  const [row] = await db.select().from(treeHeads).orderBy(desc(treeHeads.size)).limit(1);
  return row ? { ...row, at: row.at.toISOString() } : null;
}

async function settledEntries(tx: Transaction, below: string): Promise<{ ids: number[]; xmin: string }> {
  const rows = await tx.execute<{ id: string | null; xmin: string }>(sql`
    with snapshot as materialized (select pg_current_snapshot() as s)
    select e.id, pg_snapshot_xmin(s)::text as xmin
    from snapshot left join trail_entries e
      on e.xid >= ${below}::xid8 and (e.xid < pg_snapshot_xmin(s) or e.xid >= pg_snapshot_xmax(s))
      and not exists (select from trail_leaves l where l.entry_id = e.id)
    order by e.id`);
  return { ids: rows.flatMap((row) => (row.id === null ? [] : [Number(row.id)])), xmin: rows[0].xmin };
}

async function appendEntries(
  tx: Transaction,
  size: number,
  ids: readonly number[],
  key: TrailKey
): Promise<TreeHead> {
  const tree = await loadTree(tx, size);
  for (let from = 0; from < ids.length; from += CHUNK) {
    const entries = await tx
      .select({ id: trailEntries.id, content: trailEntries.content })
      .from(trailEntries)
      .where(inArray(trailEntries.id, ids.slice(from, from + CHUNK)))
      .orderBy(asc(trailEntries.id));
    const nodes: TreeNode[] = [];
    const leaves = entries.map((entry) => {
      const hash = leafHash(sha256, Buffer.from(entry.content));
      const leaf = { leafIndex: tree.size, entryId: entry.id, leafHash: hex(hash) };
      nodes.push(...tree.append(hash));
      return leaf;
    });
    await tx.insert(trailLeaves).values(leaves);
    const rows = nodes.map((node) => ({ level: node.level, nodeIndex: node.index, hash: hex(node.hash) }));
    if (rows.length > 0) await tx.insert(trailNodes).values(rows);
  }
  const [{ at }] = await tx.execute<{ at: string }>(
    sql`select to_char(clock_timestamp() at time zone 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"') as at`
  );
  const head = key.signHead(tree.size, hex(tree.root()), at);
  await tx.insert(treeHeads).values({ ...head, at: new Date(at) });
  return head;
}

/** The tree as stored, from the hashes on its right edge. */
async function loadTree(tx: Transaction, size: number): Promise<GrowingTree> {
  const places = edgeOf(size);
  const hashes = await Promise.all(places.map((place) => storedHash(tx, place.height, place.index)));
  return new GrowingTree(
    sha256,
    size,
    places.map((place, index) => ({ height: place.height, hash: Buffer.from(hashes[index], 'hex') }))
  );
}

/** Stored hash of the full subtree at a height (0: a leaf) and index. */
export async function storedHash(db: Executor, height: number, index: number): Promise<string> {
  const [row] =
    height === 0
      ? await db
          .select({ hash: trailLeaves.leafHash })
          .from(trailLeaves)
          .where(sql`${trailLeaves.leafIndex} = ${index}`)
      : await db
          .select({ hash: trailNodes.hash })
          .from(trailNodes)
          .where(and(sql`${trailNodes.level} = ${height - 1}`, sql`${trailNodes.nodeIndex} = ${index}`));
  if (!row) throw new Error(`the trail's tree lacks node ${index} of height ${height}: verify the trail`);
  return row.hash;
}

export interface Sealer {
  stop(): Promise<void>;
}

/**
 * Seals what is new at every interval, until stopped. Of several processes one seals at a time. What waits for
 * its seal for more than five seconds is logged as an alarm, and so is every failure; sealing goes on.
 */
export function startSealer(db: Database, options: SealOptions & { intervalMs?: number } = {}): Sealer {
  let stopped = false;
  let wake = () => {};
  let alarmedAt = -Infinity;
  const alarm = (details: object, message: string) => {
    if (performance.now() - alarmedAt < 30_000) return;
    alarmedAt = performance.now();
    log.error(details, message);
  };
  const tick = async () => {
    try {
      await seal(db, options, false);
      const waitingMs = await oldestWaitMs(db, sealedBelow.get(db) ?? '0');
      if (waitingMs > ALARM_MS)
        alarm({ waitingMs }, 'ALARM: the audit trail has entries that are not sealed');
    } catch (error) {
      alarm({ err: error }, 'ALARM: the audit trail could not be sealed');
    }
  };
  const running = (async () => {
    await catchUpOutside(db, options).catch((error: unknown) =>
      alarm({ err: error }, 'ALARM: the file of tree heads could not be brought up to date')
    );
    while (!stopped) {
      await tick();
      await new Promise<void>((resolve) => {
        const timer = setTimeout(resolve, options.intervalMs ?? 200);
        wake = () => (clearTimeout(timer), resolve());
      });
    }
  })();
  return {
    stop: async () => {
      stopped = true;
      wake();
      await running;
    }
  };
}

async function oldestWaitMs(db: Executor, below: string): Promise<number> {
  const [{ wait }] = await db.execute<{ wait: number }>(sql`
    select coalesce(extract(epoch from clock_timestamp() - min(e.at)) * 1000, 0)::float8 as wait
    from trail_entries e
    where e.xid >= ${below}::xid8 and not exists (select from trail_leaves l where l.entry_id = e.id)`);
  return wait;
}

/**
 * A crash between commit and append leaves the newest head out of the file: it is added at the next start. A file
 * that knows of a longer trail, or of another one, is the sign of a trail that was cut or rewritten.
 */
async function catchUpOutside(db: Database, options: SealOptions): Promise<void> {
  const file = options.headsFile ?? trailHeadsFile();
  const key = options.key ?? trailKey();
  if (!file) return;
  const head = await latestHead(db);
  const known = (await readHeads(file)).heads.at(-1);
  const size = head?.size ?? 0;
  if (known && (known.size > size || (known.size === size && known.rootHash !== head?.rootHash))) {
    log.error(
      { outside: known.size, inside: size },
      'ALARM: the audit trail does not continue the tree head kept outside the database'
    );
  } else if (head && head.keyId === key.keyId && (known?.size ?? 0) < size) {
    await appendHeads(file, [{ ...head, publicKey: key.publicKey }]);
  }
}

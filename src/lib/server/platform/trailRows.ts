import { sql, type SQL } from 'drizzle-orm';
import type { Executor } from '../db/client';
import type { TreeHead } from './trailKey';

/** A leaf with its entry; content is null where the entry is gone. */
export interface LeafRow {
  readonly leafIndex: number;
  readonly entryId: number;
  readonly leafHash: string;
  readonly content: string | null;
  readonly contentHash: string | null;
  readonly columnsAgree: boolean;
  /** From the entry's own time to its sealing. */
  readonly delayMs: number;
}

export interface UnsealedRow {
  readonly entryId: number;
  readonly content: string;
  readonly contentHash: string;
  readonly columnsAgree: boolean;
  readonly ageMs: number;
}

export interface NodeRow {
  readonly level: number;
  readonly nodeIndex: number;
  readonly hash: string;
}

/**
 * Whether an entry's columns say what its content says. Written out here, and not asked of the trigger's
 * function, because who rewrites entries may have rewritten that.
 */
const COLUMNS_AGREE: SQL = sql`coalesce(e.content = jsonb_build_object(
  'id', e.id, 'xid', e.xid::text, 'at', to_char(e.at at time zone 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.US"Z"'),
  'actorId', e.actor_id, 'actorName', e.actor_name, 'actorRole', e.actor_role, 'action', e.action,
  'recordType', e.record_type, 'recordId', e.record_id, 'recordLabel', e.record_label, 'lotId', e.lot_id,
  'before', e.before, 'after', e.after, 'reason', e.reason, 'requestId', e.request_id)::text, false)`;

/** Leaves from an index on, in order. */
export async function readLeaves(db: Executor, from: number, limit: number): Promise<LeafRow[]> {
  const rows = await db.execute<{
    leaf_index: string;
    entry_id: string;
    leaf_hash: string;
    content: string | null;
    content_hash: string | null;
    agrees: boolean;
    delay: number;
  }>(sql`
    select l.leaf_index, l.entry_id, l.leaf_hash, e.content, e.content_hash, ${COLUMNS_AGREE} as agrees,
      coalesce(extract(epoch from l.sealed_at - e.at) * 1000, 0)::float8 as delay
    from trail_leaves l left join trail_entries e on e.id = l.entry_id
    where l.leaf_index >= ${from} order by l.leaf_index limit ${limit}`);
  return rows.map((row) => ({
    leafIndex: Number(row.leaf_index),
    entryId: Number(row.entry_id),
    leafHash: row.leaf_hash,
    content: row.content,
    contentHash: row.content_hash,
    columnsAgree: row.agrees,
    delayMs: row.delay
  }));
}

/** Entries that have no leaf yet. */
export async function readUnsealed(db: Executor): Promise<UnsealedRow[]> {
  const rows = await db.execute<{
    id: string;
    content: string;
    content_hash: string;
    agrees: boolean;
    age: number;
  }>(sql`
    select e.id, e.content, e.content_hash, ${COLUMNS_AGREE} as agrees,
      (extract(epoch from clock_timestamp() - e.at) * 1000)::float8 as age
    from trail_entries e where not exists (select from trail_leaves l where l.entry_id = e.id) order by e.id`);
  return rows.map((row) => ({
    entryId: Number(row.id),
    content: row.content,
    contentHash: row.content_hash,
    columnsAgree: row.agrees,
    ageMs: row.age
  }));
}

/** Signed heads of sizes above one and up to another, in order. */
export async function readHeadsUpTo(db: Executor, above: number, upTo: number): Promise<TreeHead[]> {
  const rows = await db.execute<{
    size: string;
    root_hash: string;
    at: string;
    key_id: string;
    signature: string;
  }>(sql`
    select size, root_hash, to_char(at at time zone 'UTC', 'YYYY-MM-DD"T"HH24:MI:SS.MS"Z"') as at, key_id, signature
    from tree_heads where size > ${above} and size <= ${upTo} order by size`);
  return rows.map((row) => ({
    size: Number(row.size),
    rootHash: row.root_hash,
    at: row.at,
    keyId: row.key_id,
    signature: row.signature
  }));
}

/** Stored hashes of the given nodes, by `level/index`. */
export async function readStoredNodes(db: Executor, nodes: readonly NodeRow[]): Promise<Map<string, string>> {
  const found = new Map<string, string>();
  const levels = new Set(nodes.map((node) => node.level));
  for (const level of levels) {
    const indices = nodes.filter((node) => node.level === level).map((node) => node.nodeIndex);
    const rows = await db.execute<{ node_index: string; hash: string }>(sql`
      select node_index, hash from trail_nodes
      where level = ${level} and node_index between ${Math.min(...indices)} and ${Math.max(...indices)}`);
    for (const row of rows) found.set(`${level}/${row.node_index}`, row.hash);
  }
  return found;
}

import { sql } from 'drizzle-orm';
import { nodeHash, type Hash } from '../../domain/merkleTree';
import { fullSubtrees, inclusionRanges } from '../../domain/treeRanges';
import type { Executor } from '../db/client';
import { sha256 } from './sealer';

const placeKey = (place: { height: number; index: number }) => `${place.height}/${place.index}`;

/**
 * Proofs that leaves are in the tree of the first `size` entries: for each its sibling hashes, from the leaf
 * upwards. Reads the stored hashes of full subtrees, a handful for each leaf, in two statements.
 */
export async function inclusionProofs(
  db: Executor,
  leafIndices: readonly number[],
  size: number
): Promise<Hash[][]> {
  const proofs = leafIndices.map((index) => inclusionRanges(index, size).map(fullSubtrees));
  const places = new Map(proofs.flat(2).map((place) => [placeKey(place), place]));
  const hashes = await storedHashes(db, [...places.values()]);
  const hashAt = (place: { height: number; index: number }): Hash => {
    const hash = hashes.get(placeKey(place));
    if (!hash)
      throw new Error(
        `the trail's tree lacks node ${place.index} of height ${place.height}: verify the trail`
      );
    return hash;
  };
  return proofs.map((ranges) =>
    ranges.map((subtrees) => subtrees.map(hashAt).reduceRight((right, left) => nodeHash(sha256, left, right)))
  );
}

async function storedHashes(
  db: Executor,
  places: readonly { height: number; index: number }[]
): Promise<Map<string, Hash>> {
  const found = new Map<string, Hash>();
  if (places.length === 0) return found;
  const wanted = JSON.stringify(places);
  const rows = await db.execute<{ height: number; index: string; hash: string }>(sql`
    with wanted as (select height, index from json_to_recordset(${wanted}::json) as w(height int, index bigint))
    select w.height, w.index, l.leaf_hash as hash from wanted w join trail_leaves l on w.height = 0 and l.leaf_index = w.index
    union all
    select w.height, w.index, n.hash from wanted w join trail_nodes n on w.height > 0 and n.level = w.height - 1 and n.node_index = w.index`);
  for (const row of rows) found.set(`${row.height}/${row.index}`, Buffer.from(row.hash, 'hex'));
  return found;
}

import { createHash } from 'node:crypto';
import { and, asc, eq, gt, lt, type SQL } from 'drizzle-orm';
import type { Database } from '../db/client';
import { trailEntries, trailLeaves } from '../db/schema';
import { trailHeadsFile } from './env';
import { readHeads } from './headsFile';
import { hex, sealNow } from './sealer';
import { trailKey, type TreeHead } from './trailKey';
import { inclusionProofs } from './trailProofs';

export const TRAIL_EXPORT = 'wharfinger-trail-export';
const BATCH = 500;

export interface TrailExportOptions {
  /** Which entries (a condition on trail_entries); the whole trail without it. */
  readonly where?: SQL;
  readonly headsFile?: string;
}

/**
 * The trail as text that proves itself (scripts/verify-trail.mjs checks it with nothing but Node): one JSON object a
 * line. First the header with the signed tree head that everything is under; then the entries in the order they
 * were sealed, each with its content as it was hashed, and, where only some were chosen, with its proof that it is
 * in the tree; last the count and the SHA-256 of all lines before, so that a copy that was cut short is noticed.
 *
 *     {"kind":"wharfinger-trail-export","version":1,"scope":"whole","head":{"size":2,…,"publicKey":"…"}}
 *     {"kind":"entry","leafIndex":0,"content":"{\"id\": 1, …}"}
 *     {"kind":"entry","leafIndex":1,"content":"{\"id\": 2, …}"}
 *     {"kind":"end","entries":2,"sha256":"…"}
 *
 * Seals first, so that what was written until now is in it. An empty trail gives no lines.
 */
export async function* exportTrail(db: Database, options: TrailExportOptions = {}): AsyncGenerator<string> {
  const head = await sealNow(db, options.headsFile ? { headsFile: options.headsFile } : {});
  if (!head) return;
  const digest = createHash('sha256');
  const line = (value: object): string => {
    const text = `${JSON.stringify(value)}\n`;
    digest.update(text);
    return text;
  };
  const scope = options.where ? 'selection' : 'whole';
  yield line({
    kind: TRAIL_EXPORT,
    version: 1,
    scope,
    head: { ...head, publicKey: await publicKeyOf(head, options) }
  });
  let entries = 0;
  for (let after = -1; ;) {
    const rows = await readBatch(db, after, head.size, options.where);
    const proofs = options.where
      ? await inclusionProofs(
          db,
          rows.map((row) => row.leafIndex),
          head.size
        )
      : null;
    for (const [index, { leafIndex, content }] of rows.entries()) {
      yield line({ kind: 'entry', leafIndex, content, ...(proofs ? { proof: proofs[index].map(hex) } : {}) });
    }
    entries += rows.length;
    if (rows.length < BATCH) break;
    after = rows[rows.length - 1].leafIndex;
  }
  const sha256 = digest.digest('hex');
  yield `${JSON.stringify({ kind: 'end', entries, sha256 })}\n`;
}

function readBatch(db: Database, after: number, size: number, where: SQL | undefined) {
  return db
    .select({ leafIndex: trailLeaves.leafIndex, content: trailEntries.content })
    .from(trailLeaves)
    .innerJoin(trailEntries, eq(trailEntries.id, trailLeaves.entryId))
    .where(and(gt(trailLeaves.leafIndex, after), lt(trailLeaves.leafIndex, size), where))
    .orderBy(asc(trailLeaves.leafIndex))
    .limit(BATCH);
}

/** The public half of the key that signed the head: ours, or one that the file outside has kept. */
async function publicKeyOf(head: TreeHead, options: TrailExportOptions): Promise<string | null> {
  if (head.keyId === trailKey().keyId) return trailKey().publicKey;
  const file = options.headsFile ?? trailHeadsFile();
  const known = file ? (await readHeads(file)).heads.find((kept) => kept.keyId === head.keyId) : undefined;
  return known?.publicKey ?? null;
}

/** The export as a web stream, for a download. */
export function trailExportStream(
  db: Database,
  options: TrailExportOptions = {}
): ReadableStream<Uint8Array> {
  const lines = exportTrail(db, options);
  const encoder = new TextEncoder();
  return new ReadableStream({
    pull: async (controller) => {
      const { done, value } = await lines.next();
      if (done) controller.close();
      else controller.enqueue(encoder.encode(value));
    },
    cancel: async () => {
      await lines.return(undefined);
    }
  });
}

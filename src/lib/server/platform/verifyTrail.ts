import { GrowingTree } from '../../domain/growingTree';
import { leafHash } from '../../domain/merkleTree';
import type { Database, Transaction } from '../db/client';
import { trailHeadsFile } from './env';
import { readHeads, type OutsideHead } from './headsFile';
import { hex, sha256 } from './sealer';
import { headIsSignedBy, trailKey, type PublicKey, type TreeHead } from './trailKey';
import {
  readHeadsUpTo,
  readLeaves,
  readStoredNodes,
  readUnsealed,
  type LeafRow,
  type NodeRow
} from './trailRows';

/** What was found wrong. `range` faults are known to lie among several entries only. */
export interface TrailFault {
  readonly kind: 'changed' | 'deleted' | 'slipped-in' | 'reordered' | 'range' | 'head' | 'cut' | 'unsealed';
  /** The entry's number, where one entry is to blame. */
  readonly entryId: number | null;
  /** What was found, naming the entry. */
  readonly sentence: string;
}

export interface TrailVerification {
  readonly ok: boolean;
  readonly sealed: number;
  readonly unsealed: number;
  readonly heads: number;
  /** Heads kept outside the database that were compared; with none, a cut or wholly rewritten trail cannot be told. */
  readonly outsideHeads: number;
  readonly head: TreeHead | null;
  /** The first faults found, in the order of the trail. */
  readonly faults: readonly TrailFault[];
  readonly sentence: string;
}

export interface VerifyOptions {
  /** File of heads outside the database; otherwise TRAIL_HEADS_FILE. null: compare with none. */
  readonly headsFile?: string | null;
  /** Public keys to trust besides the process's own and those of the file. */
  readonly keys?: readonly PublicKey[];
}

const BATCH = 2000;
const MAX_FAULTS = 20;
/** No transaction lasts longer: an entry sealed later than this after its own time was put there by hand. */
const LONGEST_DELAY_MS = 60 * 60 * 1000;
const UNSEALED_MS = 5000;

/**
 * Checks the whole trail, reading one unchanging state of the database: each entry's columns against its content,
 * the content against its hash and its leaf, the leaves against the stored tree and every signed head, and the
 * heads against those kept outside. Names the first entry that does not agree.
 */
export async function verifyTrail(db: Database, options: VerifyOptions = {}): Promise<TrailVerification> {
  const file = options.headsFile === undefined ? trailHeadsFile() : options.headsFile;
  const outside = file ? await readHeads(file) : { heads: [], badLines: [] };
  const keys = [
    trailKey().publicKey,
    ...(options.keys ?? []),
    ...outside.heads.map((head) => head.publicKey)
  ];
  return db.transaction((tx) => new Verification(tx, outside.heads, outside.badLines, new Set(keys)).run(), {
    isolationLevel: 'repeatable read',
    accessMode: 'read only'
  });
}

const HEAD_NAMES = { inside: 'The tree head', outside: 'The tree head kept outside the database' } as const;

class Verification {
  readonly #faults: TrailFault[] = [];
  readonly #tree = new GrowingTree(sha256);
  readonly #nodes: NodeRow[] = [];
  readonly #outside: OutsideHead[];
  readonly #lastGood = { inside: 0, outside: 0 };
  #rootFault: string | undefined;
  #heads = 0;
  #head: TreeHead | null = null;

  constructor(
    private readonly tx: Transaction,
    outside: readonly OutsideHead[],
    badLines: readonly number[],
    private readonly keys: ReadonlySet<PublicKey>
  ) {
    this.#outside = [...outside].sort((a, b) => a.size - b.size);
    for (const line of badLines)
      this.#fault(
        'head',
        null,
        `Line ${line} of the file of tree heads outside the database is not a tree head.`
      );
    for (const head of outside) {
      if (!headIsSignedBy(head, head.publicKey))
        this.#fault(
          'head',
          null,
          `The tree head of ${head.size} entries outside the database does not verify with its key.`
        );
    }
  }

  async run(): Promise<TrailVerification> {
    let outsideAt = 0;
    for (
      let rows = await readLeaves(this.tx, 0, BATCH);
      rows.length > 0;
      rows = await readLeaves(this.tx, this.#tree.size, BATCH)
    ) {
      const heads = await readHeadsUpTo(this.tx, this.#tree.size, this.#tree.size + BATCH);
      const gap = rows.findIndex((row, index) => row.leafIndex !== this.#tree.size + index);
      for (const row of gap < 0 ? rows : rows.slice(0, gap)) {
        this.#checkLeaf(row);
        while (heads.length > 0 && heads[0].size === this.#tree.size)
          this.#checkHead(heads.shift() as TreeHead);
        while (this.#outside[outsideAt]?.size <= this.#tree.size)
          this.#checkOutside(this.#outside[outsideAt++]);
      }
      await this.#checkNodes(rows);
      this.#checkRoots();
      if (gap >= 0) {
        this.#fault(
          'deleted',
          null,
          `Leaf ${this.#tree.size} of the tree is missing: the entry after ${this.#nameOfLast(rows, gap)} was deleted.`
        );
        break;
      }
    }
    await this.#checkLostHeads();
    for (const head of this.#outside.slice(outsideAt).slice(-1)) {
      this.#fault(
        'cut',
        null,
        `A tree head outside the database tells of ${head.size} entries, here are ${this.#tree.size}: the end of the trail is missing.`
      );
    }
    return this.#result(await this.#checkUnsealed());
  }

  #checkLeaf(row: LeafRow): void {
    const stored = Buffer.from(row.leafHash, 'hex');
    if (row.content === null) {
      this.#fault('deleted', row.entryId, `Entry ${row.entryId} was deleted.`);
      this.#nodes.push(...this.#tree.append(stored).map(named));
      return;
    }
    const content = Buffer.from(row.content);
    const leaf = leafHash(sha256, content);
    if (!row.columnsAgree)
      this.#fault(
        'changed',
        row.entryId,
        `Entry ${row.entryId} was changed: its columns no longer say what its content says.`
      );
    else if (hex(sha256(content)) !== row.contentHash)
      this.#fault(
        'changed',
        row.entryId,
        `Entry ${row.entryId} was changed: its content no longer has its hash.`
      );
    else if (!stored.equals(leaf))
      this.#fault(
        'changed',
        row.entryId,
        `Entry ${row.entryId} was changed: its content and hash were rewritten, its leaf in the tree was not.`
      );
    else if (row.delayMs > LONGEST_DELAY_MS)
      this.#fault(
        'slipped-in',
        row.entryId,
        `Entry ${row.entryId} was slipped in: it bears a time long before it was sealed.`
      );
    this.#nodes.push(...this.#tree.append(leaf).map(named));
  }

  async #checkNodes(rows: readonly LeafRow[]): Promise<void> {
    const made = this.#nodes.splice(0);
    const stored = await readStoredNodes(this.tx, made);
    const wrong = made.find((node) => stored.get(`${node.level}/${node.nodeIndex}`) !== node.hash);
    if (!wrong || this.#faults.length > 0) return;
    const width = 2 ** (wrong.level + 1);
    const [first, last] = [wrong.nodeIndex * width, (wrong.nodeIndex + 1) * width - 1];
    const ids = rows
      .filter((row) => row.leafIndex >= first && row.leafIndex <= last)
      .map((row) => row.entryId);
    this.#fault(
      'reordered',
      ids[0] ?? null,
      `At leaves ${first} to ${last} stand the entries ${ids.join(', ')}, but others were sealed there: entries were rewritten, exchanged, put in or taken out.`
    );
  }

  #checkHead(head: TreeHead): void {
    this.#heads += 1;
    this.#head = head;
    const key = [...this.keys].find((candidate) => headIsSignedBy(head, candidate));
    if (!key)
      this.#fault('head', null, `The tree head of ${head.size} entries is not signed by a known key.`);
    this.#compareRoot(head, 'inside');
  }

  #checkOutside(head: OutsideHead): void {
    // A size that is no longer reached was told as a gap already.
    if (head.size === this.#tree.size) this.#compareRoot(head, 'outside');
  }

  #compareRoot(head: TreeHead, from: 'inside' | 'outside'): void {
    if (hex(this.#tree.root()) === head.rootHash) {
      this.#lastGood[from] = Math.max(this.#lastGood[from], head.size);
    } else {
      this.#rootFault ??= `${HEAD_NAMES[from]} of ${head.size} entries does not agree: something among leaves ${this.#lastGood[from]} to ${head.size - 1} was rewritten.`;
    }
  }

  /** A root that differs says only "somewhere": told where nothing nearer was found. */
  #checkRoots(): void {
    if (this.#rootFault && this.#faults.length === 0) this.#fault('range', null, this.#rootFault);
  }

  async #checkLostHeads(): Promise<void> {
    const [longer] = (await readHeadsUpTo(this.tx, this.#tree.size, Number.MAX_SAFE_INTEGER)).slice(-1);
    if (longer)
      this.#fault(
        'cut',
        null,
        `A signed tree head tells of ${longer.size} entries, here are ${this.#tree.size}: the end of the trail is missing.`
      );
  }

  async #checkUnsealed(): Promise<number> {
    const rows = await readUnsealed(this.tx);
    for (const row of rows) {
      if (!row.columnsAgree || hex(sha256(Buffer.from(row.content))) !== row.contentHash) {
        this.#fault(
          'changed',
          row.entryId,
          `Entry ${row.entryId} was changed or put in by hand before it was sealed.`
        );
      } else if (row.ageMs > UNSEALED_MS) {
        this.#fault(
          'unsealed',
          row.entryId,
          `Entry ${row.entryId} has waited ${Math.round(row.ageMs / 1000)} s for its seal: the sealer does not run, or the entry was put in by hand.`
        );
      }
    }
    return rows.length;
  }

  #nameOfLast(rows: readonly LeafRow[], gap: number): string {
    return gap > 0 ? `entry ${rows[gap - 1].entryId}` : `leaf ${this.#tree.size - 1}`;
  }

  #fault(kind: TrailFault['kind'], entryId: number | null, sentence: string): void {
    if (this.#faults.length < MAX_FAULTS) this.#faults.push({ kind, entryId, sentence });
  }

  #result(unsealed: number): TrailVerification {
    const ok = this.#faults.length === 0;
    const compared =
      this.#outside.length > 0
        ? `compared with ${this.#outside.length} tree heads kept outside`
        : 'compared with no tree head from outside, so a cut end could not be seen';
    return {
      ok,
      sealed: this.#tree.size,
      unsealed,
      heads: this.#heads,
      outsideHeads: this.#outside.length,
      head: this.#head,
      faults: this.#faults,
      sentence: ok
        ? `All ${this.#tree.size} sealed entries are as they were written (${compared}).`
        : this.#faults[0].sentence
    };
  }
}

const named = (node: { level: number; index: number; hash: Uint8Array }): NodeRow => ({
  level: node.level,
  nodeIndex: node.index,
  hash: hex(node.hash)
});

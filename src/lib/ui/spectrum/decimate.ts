import type { Numbers, Range } from './chartTypes';

/** Index of the first element not below `value`, of a rising axis. */
export function firstAtLeast(x: Numbers, value: number): number {
  let low = 0;
  let high = x.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (x[middle] < value) low = middle + 1;
    else high = middle;
  }
  return low;
}

/**
 * The part of a line that lies in a window, thinned to what the pixels can show: in each pixel column the first, the
 * lowest, the highest and the last point, in their order. Nothing that would be seen is lost: every column's extremes
 * are the line's own, and a narrow band keeps its full height. One point beyond each edge is kept, so that the line
 * leaves the window at its true slope. Lines of fewer points than that come back whole. Gaps (NaN) stay gaps.
 */
export function decimate(x: Numbers, y: Numbers, [from, to]: Range, columns: number): [number, number][] {
  const start = Math.max(0, firstAtLeast(x, from) - 1);
  const end = Math.min(x.length, firstAtLeast(x, to) + 1);
  const points: [number, number][] = [];
  if (end - start <= 4 * columns) {
    for (let i = start; i < end; i++) points.push([x[i], y[i]]);
    return points;
  }
  const width = (to - from) / columns;
  let i = start;
  while (i < end) {
    const column = Math.floor((x[i] - from) / width);
    let last = i;
    let lowest = i;
    let highest = i;
    let gap = Number.isNaN(y[i]) ? i : -1;
    while (last + 1 < end && Math.floor((x[last + 1] - from) / width) === column) {
      last++;
      if (Number.isNaN(y[last])) gap = last;
      else {
        if (!(y[last] >= y[lowest])) lowest = last;
        if (!(y[last] <= y[highest])) highest = last;
      }
    }
    const kept = [i, lowest, highest, last, ...(gap < 0 ? [] : [gap])].sort((a, b) => a - b);
    for (const [place, index] of kept.entries())
      if (index !== kept[place - 1]) points.push([x[index], y[index]]);
    i = last + 1;
  }
  return points;
}

/** Smallest and largest value of a line in a window; null where it has none. */
export function extent(x: Numbers, y: Numbers, [from, to]: Range): Range | null {
  let low = Infinity;
  let high = -Infinity;
  for (let i = firstAtLeast(x, from); i < x.length && x[i] <= to; i++) {
    if (y[i] < low) low = y[i];
    if (y[i] > high) high = y[i];
  }
  return low <= high ? [low, high] : null;
}

/** Value of a line at a shift, straight between its points; null outside them or in a gap. */
export function valueAt(x: Numbers, y: Numbers, shiftCm1: number): number | null {
  const after = firstAtLeast(x, shiftCm1);
  if (after >= x.length) return null;
  if (x[after] === shiftCm1) return Number.isNaN(y[after]) ? null : y[after];
  if (after === 0) return null;
  const share = (shiftCm1 - x[after - 1]) / (x[after] - x[after - 1]);
  const value = y[after - 1] + share * (y[after] - y[after - 1]);
  return Number.isNaN(value) ? null : value;
}

/** Index of the point nearest to a shift. */
export function nearest(x: Numbers, shiftCm1: number): number {
  const after = Math.min(x.length - 1, firstAtLeast(x, shiftCm1));
  return after > 0 && shiftCm1 - x[after - 1] < x[after] - shiftCm1 ? after - 1 : after;
}

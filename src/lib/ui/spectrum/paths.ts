import { decimate } from './decimate';

/** SVG path of a line, thinned to the width it is drawn at. */
export function linePath(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  px: (value: number) => number,
  py: (value: number) => number,
  columns: number
): string {
  return decimate(x, y, columns)
    .map((i, k) => `${k === 0 ? 'M' : 'L'}${px(x[i]).toFixed(1)} ${py(y[i]).toFixed(1)}`)
    .join('');
}

/** Closed SVG path between two lines on one axis. */
export function bandPath(
  x: ArrayLike<number>,
  low: ArrayLike<number>,
  high: ArrayLike<number>,
  px: (value: number) => number,
  py: (value: number) => number,
  columns: number
): string {
  const there = decimate(x, high, columns);
  const back = decimate(x, low, columns).reverse();
  const forth = there
    .map((i, k) => `${k === 0 ? 'M' : 'L'}${px(x[i]).toFixed(1)} ${py(high[i]).toFixed(1)}`)
    .join('');
  return `${forth}${back.map((i) => `L${px(x[i]).toFixed(1)} ${py(low[i]).toFixed(1)}`).join('')}Z`;
}

/** Smallest and largest finite value of several arrays. */
export function extent(arrays: readonly ArrayLike<number>[]): [number, number] {
  let low = Infinity;
  let high = -Infinity;
  for (const values of arrays) {
    for (let i = 0; i < values.length; i++) {
      if (values[i] < low) low = values[i];
      if (values[i] > high) high = values[i];
    }
  }
  return low < high ? [low, high] : [0, 1];
}

/** Index of the point nearest to a position on an ascending axis. */
export function nearest(x: ArrayLike<number>, at: number): number {
  let low = 0;
  let high = x.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (x[middle] <= at) low = middle;
    else high = middle;
  }
  return at - x[low] <= x[high] - at ? low : high;
}

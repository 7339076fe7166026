/** A label over the plot: where its text is centred, and in which row, 0 nearest the plot. */
export interface PlacedLabel {
  readonly centre: number;
  readonly row: number;
}

/**
 * Rows for labels above the plot, so that none covers another: each takes the lowest row where it is free, from left
 * to right. `centres` and `widths` are in pixels; labels are kept between `from` and `to`.
 */
export function placeAbove(
  centres: readonly number[],
  widths: readonly number[],
  from: number,
  to: number
): PlacedLabel[] {
  const order = centres.map((_, index) => index).sort((a, b) => centres[a] - centres[b]);
  const ends: number[] = [];
  const placed: PlacedLabel[] = Array.from({ length: centres.length }, () => ({ centre: 0, row: 0 }));
  for (const index of order) {
    const half = widths[index] / 2;
    const centre = Math.max(from + half, Math.min(to - half, centres[index]));
    let row = ends.findIndex((end) => end <= centre - half);
    if (row < 0) row = ends.length;
    ends[row] = centre + half + 6;
    placed[index] = { centre, row };
  }
  return placed;
}

/** Heights of labels beside the plot, moved apart to `gap` and kept between `top` and `bottom`, in their order. */
export function spreadBeside(wanted: readonly number[], gap: number, top: number, bottom: number): number[] {
  const order = wanted.map((_, index) => index).sort((a, b) => wanted[a] - wanted[b]);
  const heights = order.map((index) => wanted[index]);
  for (let i = 0; i < heights.length; i++) {
    heights[i] = Math.max(heights[i], i === 0 ? top : heights[i - 1] + gap);
  }
  for (let i = heights.length - 1; i >= 0; i--) {
    heights[i] = Math.min(heights[i], i === heights.length - 1 ? bottom : heights[i + 1] - gap);
  }
  const spread: number[] = Array.from({ length: wanted.length }, () => 0);
  for (const [place, index] of order.entries()) spread[index] = heights[place];
  return spread;
}

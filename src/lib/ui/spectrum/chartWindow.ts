import type { Range } from './chartTypes';

/** Narrowest window, cm-1. */
const NARROWEST = 10;

/** A window kept inside the whole range, not narrower than 10 cm-1, its ends in order. */
export function keptWithin([a, b]: Range, whole: Range): Range {
  const widest = whole[1] - whole[0];
  const width = Math.min(widest, Math.max(Math.min(NARROWEST, widest), Math.abs(b - a)));
  const centre = (a + b) / 2;
  const from = Math.min(whole[1] - width, Math.max(whole[0], centre - width / 2));
  return [from, from + width];
}

/** The window made narrower (`factor` below 1) or wider about a shift, which keeps its place. */
export function zoomed(window: Range, factor: number, about: number, whole: Range): Range {
  const [from, to] = window;
  return keptWithin([about - (about - from) * factor, about + (to - about) * factor], whole);
}

/** The window moved by a share of its width; negative is to the left. */
export function moved([from, to]: Range, share: number, whole: Range): Range {
  const by = (to - from) * share;
  return keptWithin([from + by, to + by], whole);
}

/** The nearest band to the left (-1) or right (1) of a shift; null where there is none. */
export function bandBeside(bands: readonly number[], shiftCm1: number, direction: -1 | 1): number | null {
  const beyond = bands.filter((band) => (band - shiftCm1) * direction > 1e-9);
  if (beyond.length === 0) return null;
  return direction > 0 ? Math.min(...beyond) : Math.max(...beyond);
}

export interface Saturation {
  readonly saturated: boolean;
  /** Points at the flat top. */
  readonly points: number;
  /** First and last point of the longest flat top (zero-based), or null. */
  readonly run: { readonly first: number; readonly last: number } | null;
}

/** Equal maxima in a row that no real band shows on a detector with thousands of levels. */
const FLAT_RUN = 3;

/** With fewer levels than this between floor and top, equal neighbours are ordinary rounding. */
const FEWEST_LEVELS = 64;

/**
 * Whether the top of a raw spectrum is cut off flat: three or more neighbouring points at exactly the maximum,
 * or the maximum reached again and again (two flat places). A detector at its ceiling returns one value; light
 * does not. Look at the spectrum as measured: interpolation or dark subtraction after the event hides it.
 */
export function findSaturation(intensity: Float64Array): Saturation {
  const none: Saturation = { saturated: false, points: 0, run: null };
  let top = -Infinity;
  let floor = Infinity;
  for (let i = 0; i < intensity.length; i++) {
    top = Math.max(top, intensity[i]);
    floor = Math.min(floor, intensity[i]);
  }
  if (!(top > floor) || levelsBetween(intensity, floor, top) < FEWEST_LEVELS) return none;
  let atTop = 0;
  let longest = { first: 0, last: -1 };
  let flatPlaces = 0;
  for (let i = 0; i < intensity.length; i++) {
    if (intensity[i] !== top) continue;
    const first = i;
    while (i + 1 < intensity.length && intensity[i + 1] === top) i++;
    atTop += i - first + 1;
    if (i > first) flatPlaces++;
    if (i - first > longest.last - longest.first) longest = { first, last: i };
  }
  const saturated = longest.last - longest.first + 1 >= FLAT_RUN || flatPlaces >= 2;
  return saturated ? { saturated, points: atTop, run: longest } : none;
}

/** How many steps of the smallest difference in the data lie between floor and top. */
function levelsBetween(intensity: Float64Array, floor: number, top: number): number {
  let smallest = Infinity;
  for (let i = 1; i < intensity.length; i++) {
    const step = Math.abs(intensity[i] - intensity[i - 1]);
    if (step > 0) smallest = Math.min(smallest, step);
  }
  return (top - floor) / smallest;
}

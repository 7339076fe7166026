import type { ChartMarker, Numbers, Range } from './chartTypes';
import { bandBeside, keptWithin, zoomed } from './chartWindow';
import { nearest } from './decimate';

/** Where the chart stands when a key is pressed. */
export interface ChartPlace {
  readonly view: Range;
  readonly whole: Range;
  readonly cursor: number | null;
  /** Axis of the line that the cursor follows. */
  readonly axis: Numbers;
  readonly markers: readonly ChartMarker[];
}

/** What a key changes; `view` null is the whole range. */
export interface ChartAct {
  readonly cursor?: number;
  readonly view?: Range | null;
}

/** The window moved just as far as it must be to show the cursor. */
function following(place: ChartPlace, cursor: number): ChartAct {
  const [from, to] = place.view;
  if (cursor >= from && cursor <= to) return { cursor };
  const by = cursor < from ? cursor - from : cursor - to;
  return { cursor, view: keptWithin([from + by, to + by], place.whole) };
}

/** What a key does to the chart, or null when the key is not the chart's. */
export function keysOf(key: string, shift: boolean, place: ChartPlace): ChartAct | null {
  const { axis, view, whole, cursor, markers } = place;
  const at = cursor ?? (view[0] + view[1]) / 2;
  const step = (by: number): ChartAct | null => {
    if (axis.length === 0) return null;
    const from = nearest(axis, at);
    return following(place, axis[Math.min(axis.length - 1, Math.max(0, cursor === null ? from : from + by))]);
  };
  const band = (direction: -1 | 1): ChartAct | null => {
    const bands = markers.map((marker) => marker.shiftCm1);
    const next = bandBeside(bands, at, direction);
    return next === null || axis.length === 0 ? null : following(place, axis[nearest(axis, next)]);
  };
  if (key === 'ArrowLeft') return step(shift ? -10 : -1);
  if (key === 'ArrowRight') return step(shift ? 10 : 1);
  if (key === 'Home' && axis.length > 0) return { cursor: axis[nearest(axis, view[0])] };
  if (key === 'End' && axis.length > 0) return { cursor: axis[nearest(axis, view[1])] };
  if (key === '[') return band(-1);
  if (key === ']') return band(1);
  if (key === '+' || key === '=') return { view: zoomed(view, 0.5, at, whole) };
  if (key === '-') return { view: zoomed(view, 2, at, whole) };
  if (key === '0') return { view: null };
  return null;
}

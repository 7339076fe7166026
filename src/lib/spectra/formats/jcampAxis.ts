import type { ReadProblem } from './format';
import type { LineStarts } from './jcampAsdf';
import type { JcampHeader, StatedNumber } from './jcampHeader';
import { problemAt } from './jcampLabels';
import { lineAt } from './textOf';

type Refused = { readonly problem: ReadProblem };

/**
 * How far the abscissa at a line's start may lie from the even axis, in steps, beyond what rounding explains. A point
 * missing or doubled moves it by a whole step; an axis that is not even drifts by more than this as well.
 */
const TOLERATED_STEPS = 0.1;

/**
 * The even axis of an `(X++(Y..Y))` table: FIRSTX to LASTX (else DELTAX, else the lines' abscissae) in equal steps.
 * What the header and the lines state must agree: NPOINTS with the points there are, DELTAX with the step, every
 * line's abscissa times XFACTOR with where the axis is by then.
 * @param n ordinates in the table, at least 1
 */
export function evenAxis(
  bytes: Uint8Array,
  header: JcampHeader,
  starts: LineStarts,
  n: number,
  notes: string[]
): { readonly x: Float64Array } | Refused {
  const first = header.firstX?.value ?? starts.x[0] * header.factorX;
  const last = lastOf(header, starts, first, n);
  if (last === null) {
    const message = 'The file states neither LASTX nor DELTAX, so its axis is unknown. Export it again.';
    return { problem: { code: 'no-data', message, line: lineAt(bytes, starts.at[0]) } };
  }
  const step = n > 1 ? (last - first) / (n - 1) : 0;
  if (!(Math.abs(step) > 0 && Math.abs(step) < Infinity)) {
    const message = `The axis begins and ends at ${first}, so it has no extent. Export the file again.`;
    return { problem: { code: 'check-failed', message, line: lineAt(bytes, starts.at[0]) } };
  }
  const contradiction =
    deltaFault(bytes, header, step, n, notes) ?? startFault(bytes, header, starts, first, step);
  if (contradiction) return contradiction;
  const x = new Float64Array(n);
  for (let i = 0; i < n; i++) x[i] = first + step * i;
  return { x };
}

function lastOf(header: JcampHeader, starts: LineStarts, first: number, n: number): number | null {
  if (header.lastX) return header.lastX.value;
  if (header.deltaX) return first + header.deltaX.value * (n - 1);
  const far = starts.index.length - 1;
  const points = starts.index[far];
  return points > 0 ? first + ((starts.x[far] * header.factorX - first) / points) * (n - 1) : null;
}

const half = (stated: StatedNumber | undefined) => (stated?.place ?? 0) / 2;

/** DELTAX against the step that FIRSTX, LASTX and the points make; a sign that is only the writer's habit is a note. */
function deltaFault(
  bytes: Uint8Array,
  { deltaX, firstX, lastX }: JcampHeader,
  step: number,
  n: number,
  notes: string[]
): Refused | null {
  if (!deltaX || !lastX) return null;
  const rounding = (n - 1) * half(deltaX) + half(firstX) + half(lastX);
  const off = Math.abs(Math.abs(deltaX.value) - Math.abs(step)) * (n - 1);
  if (off > TOLERATED_STEPS * Math.abs(step) + rounding) {
    const message = `DELTAX is ${deltaX.value}, but from FIRSTX to LASTX the ${n} points step by ${step}. Points are missing or the header is wrong; export the file again.`;
    return problemAt(bytes, deltaX.record, 'check-failed', message);
  }
  if (Math.sign(deltaX.value) !== Math.sign(step))
    notes.push('DELTAX has another sign than the axis; FIRSTX and LASTX were followed.');
  return null;
}

function startFault(
  bytes: Uint8Array,
  header: JcampHeader,
  starts: LineStarts,
  first: number,
  step: number
): Refused | null {
  const { factorX, firstX, lastX, deltaX } = header;
  const ends = half(firstX) + half(lastX ?? deltaX);
  for (let k = 0; k < starts.x.length; k++) {
    const is = starts.x[k] * factorX;
    const should = first + step * starts.index[k];
    // Some writers cut figures off instead of rounding: a whole unit of the last one is allowed.
    const rounding = 10 ** starts.place[k] * Math.abs(factorX) + ends;
    if (Math.abs(is - should) <= TOLERATED_STEPS * Math.abs(step) + rounding) continue;
    const message = `The line begins at ${is}, but the axis should be at ${Number(should.toPrecision(8))} there: points are missing or doubled, or the axis is not even. Export the file again.`;
    return { problem: { code: 'check-failed', message, line: lineAt(bytes, starts.at[k]) } };
  }
  return null;
}

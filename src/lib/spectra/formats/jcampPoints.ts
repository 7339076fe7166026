import type { ReadProblem } from './format';
import { decodeAsdf } from './jcampAsdf';
import { evenAxis } from './jcampAxis';
import type { ChosenBlock } from './jcampBlocks';
import type { JcampHeader, StatedNumber } from './jcampHeader';
import { problemAt } from './jcampLabels';
import { decodePairs, lineOfPoint } from './jcampPairs';
import { firstTurn, turnProblem } from './oneWay';

/** Even table `(X++(Y..Y))` or pairs `(XY..XY)`, with the letters used for the two variables. */
export interface DataForm {
  readonly even: boolean;
  readonly x: string;
  readonly y: string;
}

export interface Points {
  readonly x: Float64Array;
  readonly y: Float64Array;
}
type Refused = { readonly problem: ReadProblem };

/** The points of the chosen data table, factors applied, in the order of the file; counts and axis are checked. */
export function pointsOf(
  bytes: Uint8Array,
  chosen: ChosenBlock,
  form: DataForm,
  header: JcampHeader
): Points | Refused {
  const { data, notes } = chosen;
  let from = data.from;
  while (from < data.to && bytes[from] !== 0x0a && bytes[from] !== 0x0d) from++;
  const points = form.even
    ? evenPoints(bytes, from, data.to, header, notes)
    : pairedPoints(bytes, from, data.to, header);
  if ('problem' in points) return points;
  const n = points.y.length;
  if (header.points && header.points.value !== n) return miscounted(bytes, chosen, header.points.value, n);
  if (!header.points) {
    if (!chosen.block.end)
      return problemAt(
        bytes,
        data,
        'count-mismatch',
        'The file states neither how many points it has nor its end (##END=), so it may be cut short. Export it again.'
      );
    notes.push('The file does not state its number of points, so that could not be checked.');
  }
  return points;
}

function miscounted(bytes: Uint8Array, { data }: ChosenBlock, stated: number, n: number): Refused {
  const message = `The file says ${stated} points but holds ${n}. It is cut short or damaged; export it again.`;
  return problemAt(bytes, data, 'count-mismatch', message);
}

const empty: Refused = {
  problem: { code: 'no-data', message: 'The data table is empty. Export the spectrum again.' }
};

function evenPoints(
  bytes: Uint8Array,
  from: number,
  to: number,
  header: JcampHeader,
  notes: string[]
): Points | Refused {
  const table = decodeAsdf(bytes, from, to, header.points?.value);
  if ('problem' in table) return table;
  const { y, starts } = table;
  if (y.length === 0) return empty;
  // A wrong count moves the axis too; it is the plainer thing to say.
  const axis =
    header.points && header.points.value !== y.length
      ? { x: new Float64Array(y.length) }
      : evenAxis(bytes, header, starts, y.length, notes);
  if ('problem' in axis) return axis;
  if (header.factorY !== 1) for (let i = 0; i < y.length; i++) y[i] *= header.factorY;
  return { x: axis.x, y };
}

function pairedPoints(bytes: Uint8Array, from: number, to: number, header: JcampHeader): Points | Refused {
  const pairs = decodePairs(bytes, from, to, header.points?.value);
  if ('problem' in pairs) return pairs;
  const { factorX, factorY } = header;
  const x = factorX === 1 ? pairs.x : pairs.x.map((value) => value * factorX);
  const y = factorY === 1 ? pairs.y : pairs.y.map((value) => value * factorY);
  if (x.length === 0) return empty;
  const turn = firstTurn(x);
  if (turn >= 0) return { problem: turnProblem(x, turn, lineOfPoint(bytes, from, to, turn)) };
  return (
    endFault(bytes, 'FIRSTX', header.firstX, x[0], x[1] - x[0]) ??
    endFault(bytes, 'LASTX', header.lastX, x[x.length - 1], x[x.length - 1] - x[x.length - 2]) ?? { x, y }
  );
}

/** An end of the axis as stated, against the point that is there; half a step covers any rounding. */
function endFault(
  bytes: Uint8Array,
  label: string,
  stated: StatedNumber | undefined,
  is: number,
  step: number
): Refused | null {
  if (!stated || !(Math.abs(stated.value - is) > Math.abs(step) / 2 + stated.place)) return null;
  const message = `${label} is ${stated.value}, but the axis has ${is} there. Points are missing or the header is wrong; export the file again.`;
  return problemAt(bytes, stated.record, 'check-failed', message);
}

import type { ReadProblem } from './format';
import { decodeAsdf } from './jcampAsdf';
import { numberOf, valueOf, type Block, type LabelledRecord } from './jcampLabels';
import { decodePairs } from './jcampPairs';

export interface Points {
  readonly x: Float64Array;
  readonly y: Float64Array;
}

/** Data bytes begin on the line after the label. */
function bodyOf(bytes: Uint8Array, record: LabelledRecord): { from: number; line: number } {
  let from = record.from;
  while (from < record.to && bytes[from] !== 0x0a && bytes[from] !== 0x0d) from++;
  return { from, line: record.line };
}

/** An ordinate table with its axis: `(X++(Y..Y))`, cross-checked against what the header states. */
export function readTable(
  bytes: Uint8Array,
  block: Block,
  record: LabelledRecord,
  notes: string[]
): Points | { problem: ReadProblem } {
  const body = bodyOf(bytes, record);
  const stated = numberOf(block, 'NPOINTS') ?? listed(block, 'VARDIM');
  const table = decodeAsdf(bytes, body.from, record.to, body.line, stated ?? 0);
  if ('problem' in table) return table;
  const n = table.y.length;
  if (n === 0)
    return {
      problem: {
        code: 'no-data',
        line: record.line,
        message: 'The data table is empty. Export the spectrum again.'
      }
    };
  if (stated !== undefined && stated !== n) {
    return {
      problem: {
        code: 'count-mismatch',
        line: record.line,
        message: `The file says ${stated} points but holds ${n}. It is cut short or damaged; export it again.`
      }
    };
  }
  const factorX = numberOf(block, 'XFACTOR') ?? listed(block, 'FACTOR') ?? 1;
  const factorY = numberOf(block, 'YFACTOR') ?? listed(block, 'FACTOR', 1) ?? 1;
  const axis = axisOf(block, n, factorX, table.starts);
  if ('problem' in axis) return axis;
  if (stated === undefined)
    notes.push('The file does not state the number of points, so it could not be checked.');
  const y = table.y;
  if (factorY !== 1) for (let i = 0; i < n; i++) y[i] *= factorY;
  return { x: axis.x, y };
}

/** n-th entry of a comma list such as NTUPLES' VAR_DIM, as a number. */
function listed(block: Block, label: string, index = 0): number | undefined {
  const entry = valueOf(block, label)?.split(',')[index]?.trim();
  if (entry === undefined || entry === '') return undefined;
  const value = Number(entry);
  return Number.isFinite(value) ? value : undefined;
}

function axisOf(
  block: Block,
  n: number,
  factorX: number,
  starts: readonly { x: number; index: number; line: number }[]
): { x: Float64Array } | { problem: ReadProblem } {
  const first = numberOf(block, 'FIRSTX') ?? listed(block, 'FIRST') ?? starts[0].x * factorX;
  const delta = numberOf(block, 'DELTAX');
  const last =
    numberOf(block, 'LASTX') ??
    listed(block, 'LAST') ??
    (delta === undefined ? undefined : first + delta * (n - 1));
  const end = last ?? lastFromStarts(n, first, factorX, starts);
  if (end === undefined)
    return {
      problem: {
        code: 'no-data',
        message: 'The file states neither LASTX nor DELTAX, so its axis is unknown. Export it again.'
      }
    };
  const step = n > 1 ? (end - first) / (n - 1) : 0;
  if (n > 1 && step === 0)
    return {
      problem: {
        code: 'check-failed',
        message: 'FIRSTX and LASTX are equal, so the axis has no extent. Export the file again.'
      }
    };
  if (delta !== undefined && n > 1 && Math.abs(Math.abs(delta) - Math.abs(step)) > 0.02 * Math.abs(step)) {
    return {
      problem: {
        code: 'check-failed',
        message: `DELTAX is ${delta} but the axis steps by ${step}. The file contradicts itself; export it again.`
      }
    };
  }
  for (const start of starts) {
    const should = first + step * start.index;
    // Line abscissae are often rounded: half a unit of their last figure or one step is allowed.
    if (Math.abs(start.x * factorX - should) > Math.abs(step) * 1.01 + Math.abs(factorX) * 0.51) {
      return {
        problem: {
          code: 'check-failed',
          line: start.line,
          message: `The line begins at ${start.x * factorX}, but the axis should be at ${should.toPrecision(8)}: points are missing or doubled. Export the file again.`
        }
      };
    }
  }
  const x = new Float64Array(n);
  for (let i = 0; i < n; i++) x[i] = first + step * i;
  return { x };
}

function lastFromStarts(
  n: number,
  first: number,
  factorX: number,
  starts: readonly { x: number; index: number }[]
): number | undefined {
  const far = starts[starts.length - 1];
  if (far.index === 0) return undefined;
  return first + ((far.x * factorX - first) / far.index) * (n - 1);
}

/** Points as pairs: `(XY..XY)`. */
export function readPairs(
  bytes: Uint8Array,
  block: Block,
  record: LabelledRecord
): Points | { problem: ReadProblem } {
  const body = bodyOf(bytes, record);
  const pairs = decodePairs(bytes, body.from, record.to, body.line);
  if ('problem' in pairs) return pairs;
  const stated = numberOf(block, 'NPOINTS');
  if (stated !== undefined && stated !== pairs.x.length) {
    return {
      problem: {
        code: 'count-mismatch',
        line: record.line,
        message: `The file says ${stated} points but holds ${pairs.x.length}. It is cut short or damaged; export it again.`
      }
    };
  }
  const factorX = numberOf(block, 'XFACTOR') ?? 1;
  const factorY = numberOf(block, 'YFACTOR') ?? 1;
  return { x: pairs.x.map((value) => value * factorX), y: pairs.y.map((value) => value * factorY) };
}

import { DecimalReader } from './decimal';
import type { ReadProblem } from './format';
import { lineAt, shown } from './textOf';

export interface Pairs {
  /** As written, without factors. */
  readonly x: Float64Array;
  readonly y: Float64Array;
}

const DOLLAR = 0x24;
const isEnd = (byte: number) => byte === 0x0a || byte === 0x0d;
/** Space, tab, comma and semicolon split numbers and points alike. */
const isGap = (byte: number) => byte === 0x20 || byte === 0x09 || byte === 0x2c || byte === 0x3b;

/**
 * Decodes points `(XY..XY)` of JCAMP-DX: x and y split by a comma or spaces, points by semicolons, spaces or line
 * ends. A line holds whole points: one with an odd count of numbers has lost one and is refused.
 *
 * Example: `100.5, 12; 101.0, 13` and `101.5 12.5` are three points.
 */
export function decodePairs(
  bytes: Uint8Array,
  from: number,
  to: number,
  expected = 0
): Pairs | { readonly problem: ReadProblem } {
  const numbers = new DecimalReader(bytes);
  // The shortest point is four bytes ("1,2;"): the file's own size bounds what is made ready.
  let flat = new Float64Array(Math.min(2 * expected + 2, (to - from) / 2 + 2));
  let count = 0;
  let lineFirst = 0;
  let lineStart = from;
  const fail = (code: ReadProblem['code'], at: number, what: string) => ({
    problem: {
      code,
      line: lineAt(bytes, at),
      message: `${what} The whole file was refused; export it again.`
    }
  });
  for (let i = from; i <= to;) {
    const byte = i < to ? bytes[i] : 0x0a;
    if (isEnd(byte)) {
      if ((count - lineFirst) % 2 === 1)
        return fail('syntax', lineStart, 'The line holds a number without its partner.');
      lineFirst = count;
      lineStart = ++i;
    } else if (isGap(byte)) i++;
    else if (byte === DOLLAR && bytes[i + 1] === DOLLAR) {
      while (i < to && !isEnd(bytes[i])) i++;
    } else {
      const value = numbers.read(i, to);
      const end = numbers.end;
      if (
        !Number.isFinite(value) ||
        (end < to && !isEnd(bytes[end]) && !isGap(bytes[end]) && bytes[end] !== DOLLAR)
      )
        return fail(byte === 0x3f ? 'no-data' : 'syntax', i, notNumber(bytes, i, to));
      if (count === flat.length) flat = grown(flat);
      flat[count++] = value;
      i = end;
    }
  }
  const x = new Float64Array(count / 2);
  const y = x.map((_, k) => flat[2 * k + 1]);
  return { x: x.map((_, k) => flat[2 * k]), y };
}

function grown(values: Float64Array): Float64Array<ArrayBuffer> {
  const larger = new Float64Array(values.length * 2 + 64);
  larger.set(values);
  return larger;
}

function notNumber(bytes: Uint8Array, at: number, to: number): string {
  let end = at;
  while (end < to && !isEnd(bytes[end]) && !isGap(bytes[end])) end++;
  const text = shown(bytes, at, end);
  return bytes[at] === 0x3f
    ? 'A point is marked as missing ("?").'
    : `${text} stands where a number should be.`;
}

/** One-based line of a point, for messages: the table is walked again up to it. */
export function lineOfPoint(bytes: Uint8Array, from: number, to: number, point: number): number {
  const numbers = new DecimalReader(bytes);
  let count = 0;
  let i = from;
  while (i < to) {
    if (isEnd(bytes[i]) || isGap(bytes[i])) i++;
    else if (bytes[i] === DOLLAR) while (i < to && !isEnd(bytes[i])) i++;
    else {
      if (count === 2 * point) break;
      numbers.read(i, to);
      i = numbers.end;
      count++;
    }
  }
  return lineAt(bytes, i);
}

import { decimalEnd, readDecimal } from './decimal';
import type { Layout } from './delimitedLayout';
import type { ReadProblem } from './format';

export interface Rows {
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** One-based line of each point. */
  readonly lines: Uint32Array;
}

const isSpace = (byte: number) => byte === 0x20 || byte === 0x09;
const isEnd = (byte: number) => byte === 0x0a || byte === 0x0d;

/** Reads the rows of numbers byte by byte. A line that is not numbers ends in an error that names it. */
export function readRows(
  bytes: Uint8Array,
  layout: Layout,
  axis: number,
  intensity: number
): Rows | { readonly problem: ReadProblem } {
  const room = Math.floor((bytes.length - layout.dataStart) / 4) + 2;
  const x = new Float64Array(room);
  const y = new Float64Array(room);
  const lines = new Uint32Array(room);
  const last = Math.max(axis, intensity);
  let count = 0;
  let line = layout.dataLine;
  let i = layout.dataStart;
  while (i < bytes.length) {
    while (i < bytes.length && isSpace(bytes[i])) i++;
    if (i >= bytes.length) break;
    if (isEnd(bytes[i])) {
      i += bytes[i] === 0x0d && bytes[i + 1] === 0x0a ? 2 : 1;
      line++;
      continue;
    }
    for (let column = 0; column <= last; column++) {
      const quoted = bytes[i] === 0x22;
      if (quoted) i++;
      const value = readDecimal(bytes, i, bytes.length, layout.decimalMark);
      const wanted = column === axis || column === intensity;
      let end = decimalEnd;
      if (quoted && bytes[end] === 0x22) end++;
      while (end < bytes.length && isSpace(bytes[end]) && layout.delimiter !== 0x09) end++;
      const stop = end >= bytes.length || isEnd(bytes[end]);
      const split =
        layout.delimiter === 0x20 ? end > decimalEnd || stop : bytes[end] === layout.delimiter || stop;
      if (wanted && (Number.isNaN(value) || !split)) return { problem: badCell(bytes, i, line, column) };
      if (!wanted && !split) end = skipCell(bytes, i, layout.delimiter);
      if (column === axis) x[count] = value;
      else if (column === intensity) y[count] = value;
      if (column < last && (end >= bytes.length || isEnd(bytes[end]))) return { problem: shortRow(line) };
      i = column < last && layout.delimiter !== 0x20 ? end + 1 : end;
      if (column < last) while (i < bytes.length && isSpace(bytes[i]) && layout.delimiter !== 0x09) i++;
    }
    while (i < bytes.length && !isEnd(bytes[i])) i++;
    lines[count++] = line;
  }
  return { x: x.slice(0, count), y: y.slice(0, count), lines: lines.slice(0, count) };
}

function skipCell(bytes: Uint8Array, from: number, delimiter: number): number {
  let i = from;
  const split = (byte: number) => (delimiter === 0x20 ? isSpace(byte) : byte === delimiter);
  while (i < bytes.length && !isEnd(bytes[i]) && !split(bytes[i])) i++;
  return i;
}

function badCell(bytes: Uint8Array, from: number, line: number, column: number): ReadProblem {
  let end = from;
  while (end < bytes.length && !isEnd(bytes[end]) && end < from + 24) end++;
  const shown = String.fromCharCode(...bytes.subarray(from, end)).replaceAll(/[^ -~]/g, '?');
  return {
    code: 'syntax',
    line,
    message: `"${shown}" in column ${column + 1} is not a number. The whole file was refused; export the spectrum again.`
  };
}

const shortRow = (line: number): ReadProblem => ({
  code: 'syntax',
  line,
  message:
    'The line has fewer columns than those before it. The whole file was refused; export the spectrum again.'
});

import { cellsOf, isEnd, nextLine, SPACE, TAB, type Cells } from './cells';
import { COMMA, DecimalReader, POINT } from './decimal';
import type { ReadOptions, ReadProblem } from './format';
import { lineAt, shown } from './textOf';

export interface Layout {
  /** Byte that splits columns; SPACE stands for any run of spaces and tabs. */
  readonly delimiter: number;
  readonly decimalMark: number;
  readonly columnCount: number;
  /** Whether each column of the first row is a number. */
  readonly numeric: readonly boolean[];
  /** Index of the first byte of the first row of numbers. */
  readonly dataStart: number;
  readonly notes: readonly string[];
}

const DELIMITERS = [
  { byte: TAB, name: 'tab' },
  { byte: 0x3b, name: 'semicolon' },
  { byte: 0x7c, name: 'vertical bar' },
  { byte: COMMA, name: 'comma' },
  { byte: SPACE, name: 'spaces' }
] as const;
type Delimiter = (typeof DELIMITERS)[number];

/** How much of a file is searched for the first row: no header is longer. */
const MAX_HEADER_BYTES = 200_000;

interface Found {
  readonly delimiter: Delimiter;
  readonly mark: number;
  readonly marked: boolean;
  readonly numeric: readonly boolean[];
}

/**
 * Finds where the numbers begin, what splits columns and which decimal mark is used. The rule: the first line that
 * some delimiter (tab, semicolon, vertical bar, comma, spaces, in this order) splits into at least two numbers, and
 * its next line likewise in the same columns. Numbers with a point are tried first; where the first rows hold whole
 * numbers alone, the first point or comma further down decides. A comma is both only where numbers stand in quotes.
 */
export function layoutOf(
  bytes: Uint8Array,
  options: ReadOptions
): Layout | { readonly problem: ReadProblem } {
  const limit = Math.min(bytes.length, MAX_HEADER_BYTES);
  for (let start = 0, line = 0; start < limit; start = nextLine(bytes, start), line++) {
    if (!mayBeRow(bytes, start)) continue;
    const found = rowsAt(bytes, start, options);
    if (!found) continue;
    const lost = lostRow(bytes, start, found);
    if (lost !== null) return { problem: lostRowProblem(bytes, lost) };
    const { delimiter, mark, marked, numeric } = found;
    const decimals = !marked
      ? 'all numbers are whole'
      : `numbers have a decimal ${mark === COMMA ? 'comma' : 'point'}`;
    const notes = [`Columns are split by ${delimiter.name}; ${decimals}.`];
    if (line > 0)
      notes.push(
        `${line} ${line === 1 ? 'line before the numbers was' : 'lines before the numbers were'} taken as header.`
      );
    return {
      delimiter: delimiter.byte,
      decimalMark: mark,
      columnCount: numeric.length,
      numeric,
      dataStart: start,
      notes
    };
  }
  const message =
    'There are no two columns of numbers in the file. Export the spectrum as JCAMP-DX, or as text with Raman shift and intensity in columns.';
  return { problem: { code: 'no-data', message } };
}

/** A cheap look: a row has a figure among its first cells. */
function mayBeRow(bytes: Uint8Array, start: number): boolean {
  for (let i = start; i < bytes.length && !isEnd(bytes[i]); i++)
    if (bytes[i] >= 0x30 && bytes[i] <= 0x39) return true;
  return false;
}

function rowsAt(bytes: Uint8Array, start: number, options: ReadOptions): Found | null {
  let second = nextLine(bytes, start);
  while (second < bytes.length && isEnd(bytes[second])) second = nextLine(bytes, second);
  if (second >= bytes.length) return null;
  for (const delimiter of DELIMITERS) {
    if (options.delimiter !== undefined && options.delimiter.charCodeAt(0) !== delimiter.byte) continue;
    const rows = [start, second].map((from) => rowAt(bytes, from, delimiter));
    const columns = (mark: number) => numericColumns(bytes, rows, mark, options);
    const point = options.decimalComma === true ? null : columns(POINT);
    const comma = options.decimalComma === false ? null : columns(COMMA);
    if (point && comma) return { delimiter, numeric: point, ...markFurtherDown(bytes, start, delimiter) };
    const numeric = point ?? comma;
    if (numeric) return { delimiter, numeric, mark: point ? POINT : COMMA, marked: true };
  }
  return null;
}

function rowAt(bytes: Uint8Array, from: number, delimiter: Delimiter): Cells {
  let to = from;
  while (to < bytes.length && !isEnd(bytes[to])) to++;
  return cellsOf(bytes, from, to, delimiter.byte);
}

/** Which columns are numbers in every row, when that makes an axis and an intensity; else null. */
function numericColumns(
  bytes: Uint8Array,
  rows: readonly Cells[],
  mark: number,
  { axisColumn, intensityColumn }: ReadOptions
): boolean[] | null {
  const numbers = new DecimalReader(bytes, mark);
  const [first, ...others] = rows;
  if (others.some((row) => row.length !== first.length)) return null;
  const numeric: boolean[] = [];
  for (let k = 0; k < first.length; k += 2)
    numeric.push(rows.every((row) => numbers.isNumber(row[k], row[k + 1])));
  const chosen = [axisColumn, intensityColumn].filter((column) => column !== undefined);
  if (chosen.some((column) => column < numeric.length && !numeric[column])) return null;
  return numeric.filter(Boolean).length >= 2 ? numeric : null;
}

/** The first point or comma among the rows decides where the first two hold whole numbers alone. */
function markFurtherDown(
  bytes: Uint8Array,
  start: number,
  delimiter: Delimiter
): { readonly mark: number; readonly marked: boolean } {
  const point = bytes.indexOf(POINT, start);
  const comma = delimiter.byte === COMMA ? -1 : bytes.indexOf(COMMA, start);
  if (point < 0 && comma < 0) return { mark: POINT, marked: false };
  return { mark: comma >= 0 && (point < 0 || comma < point) ? COMMA : POINT, marked: true };
}

/**
 * A damaged row at the very beginning must not pass for a header: a line among the header's that holds numbers in the
 * columns of the data, or a last one with a number beside something that is no word.
 */
function lostRow(bytes: Uint8Array, dataStart: number, { delimiter, mark, numeric }: Found): number | null {
  const numbers = new DecimalReader(bytes, mark);
  for (let start = 0; start < dataStart; start = nextLine(bytes, start)) {
    const cells = rowAt(bytes, start, delimiter);
    if (cells.length < 4) continue;
    const isNumber = (k: number) => numbers.isNumber(cells[2 * k], cells[2 * k + 1]);
    const count = cells.length / 2;
    const first = isNumber(0);
    const full = count === numeric.length && numeric.every((is, k) => !is || isNumber(k));
    if (full) return nextLine(bytes, start);
    const last = nextLine(bytes, start) >= dataStart;
    if (!last || count !== numeric.length) continue;
    const someNumber = numeric.some((is, k) => is && isNumber(k));
    if (someNumber && (first || !startsWithWord(bytes, cells[0], cells[1]))) return start;
  }
  return null;
}

function startsWithWord(bytes: Uint8Array, from: number, to: number): boolean {
  const letter = (byte: number) => (byte | 0x20) >= 0x61 && (byte | 0x20) <= 0x7a;
  let i = from;
  while (i < to && !letter(bytes[i]) && !(bytes[i] >= 0x30 && bytes[i] <= 0x39)) i++;
  return i + 1 < to && letter(bytes[i]) && letter(bytes[i + 1]);
}

function lostRowProblem(bytes: Uint8Array, at: number): ReadProblem {
  let end = at;
  while (end < bytes.length && !isEnd(bytes[end])) end++;
  const message = `${shown(bytes, at, end)} is no row of numbers, but rows of numbers stand around it. The whole file was refused; export the spectrum again.`;
  return { code: 'syntax', line: lineAt(bytes, at), message };
}

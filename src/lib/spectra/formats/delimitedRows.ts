import { isEnd, nextLine, SPACE, TAB } from './cells';
import { DecimalReader } from './decimal';
import type { Layout } from './delimitedLayout';
import type { ReadProblem } from './format';
import { latin1, lineAt, shown } from './textOf';

export interface Rows {
  readonly x: Float64Array;
  readonly y: Float64Array;
  /** Lines after the numbers that hold no numbers. */
  readonly footerLines: number;
}

const QUOTE = 0x22;
const MAX_FOOTER_LINES = 20;
const LONGEST_FOOTER = 500;

/**
 * Reads two columns of the rows of numbers, byte by byte. Every row must have the columns of the first one and a
 * number in both that are read; else the whole file is refused with the line. Lines of words after the last row, such
 * as an end mark, are counted.
 */
export function readRows(
  bytes: Uint8Array,
  layout: Layout,
  axis: number,
  intensity: number
): Rows | { readonly problem: ReadProblem } {
  return new RowReader(bytes, layout, axis, intensity).read();
}

class RowReader {
  private readonly numbers: DecimalReader;
  private readonly delimiter: number;
  private axisValue = 0;
  private intensityValue = 0;
  private problem: ReadProblem | null = null;

  constructor(
    private readonly bytes: Uint8Array,
    private readonly layout: Layout,
    private readonly axis: number,
    private readonly intensity: number
  ) {
    this.numbers = new DecimalReader(bytes, layout.decimalMark);
    this.delimiter = layout.delimiter;
  }

  read(): Rows | { readonly problem: ReadProblem } {
    const { bytes } = this;
    // A row of two columns is rarely shorter than twelve bytes; where it is, the arrays grow.
    let x = new Float64Array(Math.ceil((bytes.length - this.layout.dataStart) / 12) + 16);
    let y = new Float64Array(x.length);
    let count = 0;
    for (let i = this.layout.dataStart; i < bytes.length;) {
      if (isEnd(bytes[i]) || this.isBlank(bytes[i])) {
        i++;
        continue;
      }
      const end = this.row(i);
      if (this.problem) {
        const footerLines = footerFrom(bytes, i);
        if (footerLines === 0) return { problem: this.problem };
        return { x: x.slice(0, count), y: y.slice(0, count), footerLines };
      }
      if (count === x.length) {
        x = grown(x);
        y = grown(y);
      }
      x[count] = this.axisValue;
      y[count++] = this.intensityValue;
      i = end;
    }
    return { x: x.slice(0, count), y: y.slice(0, count), footerLines: 0 };
  }

  /** Reads the row that begins at `from` and returns where it ends; a row that is none leaves a problem. */
  private row(from: number): number {
    const { bytes, axis, intensity } = this;
    const { columnCount } = this.layout;
    const size = bytes.length;
    let i = from;
    for (let column = 0; ; column++) {
      while (i < size && this.isBlank(bytes[i])) i++;
      let end: number;
      if (column === axis || column === intensity) {
        end = this.number(i, column);
        if (end < 0) return size;
        if (column === axis) this.axisValue = this.value;
        else this.intensityValue = this.value;
      } else {
        end = this.cellEnd(i);
        if (column >= columnCount && end > i)
          return this.refuse(i, 'The line has more columns than those before it.');
      }
      if (end >= size || isEnd(bytes[end])) {
        return column + 1 < columnCount
          ? this.refuse(from, 'The line has fewer columns than those before it.')
          : end;
      }
      i = this.delimiter === SPACE ? end : end + 1;
    }
  }

  private value = 0;

  /** The number of a cell into `value`; returns where the cell's delimiter or the line's end is, -1 where it is none. */
  private number(from: number, column: number): number {
    const { bytes, numbers } = this;
    const size = bytes.length;
    const quoted = from < size && bytes[from] === QUOTE ? 1 : 0;
    this.value = numbers.read(from + quoted, size);
    const end = numbers.end + quoted;
    let i = end;
    while (i < size && this.isBlank(bytes[i])) i++;
    const stops =
      i >= size || isEnd(bytes[i]) || (this.delimiter === SPACE ? i > end : bytes[i] === this.delimiter);
    if (stops && Number.isFinite(this.value) && (quoted === 0 || bytes[end - 1] === QUOTE)) return i;
    const cellEnd = this.cellEnd(from);
    const what = cellEnd === from ? 'The cell' : shown(bytes, from, cellEnd);
    this.refuse(from, `${what} in column ${column + 1} is ${cellEnd === from ? 'empty' : 'not a number'}.`);
    return -1;
  }

  /** Where a cell ends: at its delimiter or the line's end. Quoted cells may hold the delimiter. */
  private cellEnd(from: number): number {
    const { bytes } = this;
    const size = bytes.length;
    let i = from;
    if (i < size && bytes[i] === QUOTE) {
      const close = bytes.indexOf(QUOTE, i + 1);
      if (close > 0 && close < nextLine(bytes, i)) i = close + 1;
    }
    if (this.delimiter === SPACE) while (i < size && !isEnd(bytes[i]) && !this.isBlank(bytes[i])) i++;
    else while (i < size && !isEnd(bytes[i]) && bytes[i] !== this.delimiter) i++;
    return i;
  }

  private isBlank(byte: number): boolean {
    return byte === SPACE || (byte === TAB && this.delimiter !== TAB);
  }

  private refuse(at: number, what: string): number {
    const message = `${what} The whole file was refused; export the spectrum again.`;
    this.problem ??= { code: 'syntax', line: lineAt(this.bytes, at), message };
    return this.bytes.length;
  }
}

function grown(values: Float64Array): Float64Array<ArrayBuffer> {
  const larger = new Float64Array(values.length * 2);
  larger.set(values);
  return larger;
}

/** Lines of a footer: all that is left of the file, if each line is blank, a comment, or words without a figure; else 0. */
function footerFrom(bytes: Uint8Array, from: number): number {
  let lines = 0;
  for (let start = from; start < bytes.length; start = nextLine(bytes, start)) {
    const end = Math.min(bytes.length, nextLine(bytes, start));
    const line = latin1(bytes, start, Math.min(end, start + LONGEST_FOOTER)).trim();
    if (line === '') continue;
    if (++lines > MAX_FOOTER_LINES || end - start > LONGEST_FOOTER) return 0;
    const comment = /^(#|%|\/\/)\s*[a-z]/i.test(line);
    if (!comment && (/\d/.test(line) || !/[a-z]{2}/i.test(line) || /\b(nan|inf|null|n\/a)/i.test(line)))
      return 0;
  }
  return lines;
}

/** Where a row of the table lies in the file, for messages. */
export function lineOfRow(bytes: Uint8Array, layout: Layout, row: number): number {
  let at = layout.dataStart;
  for (let left = row; ; at = nextLine(bytes, at)) {
    let i = at;
    while (i < bytes.length && (bytes[i] === SPACE || bytes[i] === TAB)) i++;
    const blank = i >= bytes.length || isEnd(bytes[i]);
    if ((!blank && left-- === 0) || at >= bytes.length) return lineAt(bytes, at);
  }
}

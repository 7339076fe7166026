import type { ReadOptions, ReadProblem } from './format';
import { latin1 } from './textOf';

export interface Layout {
  /** Byte that splits columns; 0x20 stands for any run of spaces and tabs. */
  readonly delimiter: number;
  readonly decimalMark: number;
  readonly columnCount: number;
  /** Index of the first byte of the first row of numbers, and its one-based line. */
  readonly dataStart: number;
  readonly dataLine: number;
  readonly notes: readonly string[];
}

const NAMES: Readonly<Record<string, string>> = {
  ',': 'comma',
  ';': 'semicolon',
  '\t': 'tab',
  '|': 'vertical bar',
  ' ': 'spaces'
};
const CANDIDATES = ['\t', ';', '|', ',', ' '] as const;
/** Rows looked at to settle the layout. */
const PROBE = 25;
/** Header lines looked through for the first numbers. */
const MAX_HEADER_LINES = 2000;
const LONGEST_LINE = 100_000;

/**
 * Finds where the numbers begin, what splits columns and which decimal mark is used. The rule: a delimiter that
 * gives at least two numeric columns, the same number of them, in the first rows; where comma could be both, a
 * comma is the delimiter unless another delimiter splits the rows into whole numbers with decimal commas.
 */
export function layoutOf(
  bytes: Uint8Array,
  options: ReadOptions
): Layout | { readonly problem: ReadProblem } {
  const lines = headLines(bytes);
  for (let first = 0; first < lines.length; first++) {
    const probe = lines
      .slice(first, first + PROBE)
      .map((line) => line.text)
      .filter((text) => text.trim() !== '');
    if (probe.length === 0 || !/\d/.test(probe[0])) continue;
    const found = delimiterOf(probe, options);
    if (!found) continue;
    const mark = found.comma ? 0x2c : 0x2e;
    const notes = [
      `Columns are split by ${NAMES[found.delimiter]}; numbers have a decimal ${found.comma ? 'comma' : 'point'}.`
    ];
    if (first > 0)
      notes.push(`${first} ${first === 1 ? 'line' : 'lines'} before the numbers were taken as header.`);
    return {
      delimiter: found.delimiter.charCodeAt(0),
      decimalMark: mark,
      columnCount: found.columns,
      dataStart: lines[first].start,
      dataLine: first + 1,
      notes
    };
  }
  return {
    problem: {
      code: 'no-data',
      message:
        'There are no two columns of numbers in the file. Export the spectrum as JCAMP-DX, or as text with Raman shift and intensity in columns.'
    }
  };
}

function headLines(bytes: Uint8Array): { text: string; start: number }[] {
  const lines: { text: string; start: number }[] = [];
  let start = 0;
  while (start < bytes.length && lines.length < MAX_HEADER_LINES) {
    let end = start;
    while (end < bytes.length && bytes[end] !== 0x0a && bytes[end] !== 0x0d) end++;
    lines.push({ text: latin1(bytes, start, Math.min(end, start + LONGEST_LINE)), start });
    start = bytes[end] === 0x0d && bytes[end + 1] === 0x0a ? end + 2 : end + 1;
  }
  return lines;
}

const POINT_NUMBER = /^[+-]?(\d+\.?\d*|\.\d+)([eE][+-]?\d+)?$/;
const COMMA_NUMBER = /^[+-]?(\d+,?\d*|,\d+)([eE][+-]?\d+)?$/;

function delimiterOf(
  probe: readonly string[],
  options: ReadOptions
): { delimiter: string; comma: boolean; columns: number } | null {
  const delimiters = options.delimiter ? [options.delimiter] : CANDIDATES;
  for (const delimiter of delimiters) {
    const marks = options.decimalComma === undefined ? [false, true] : [options.decimalComma];
    for (const comma of marks) {
      if (comma && delimiter === ',') continue;
      const columns = numericColumns(probe, delimiter, comma ? COMMA_NUMBER : POINT_NUMBER);
      if (columns >= 2) return { delimiter, comma, columns };
    }
  }
  return null;
}

/** Columns of the first row when it and at least its successor are numbers in the first two columns; else 0. */
function numericColumns(probe: readonly string[], delimiter: string, number: RegExp): number {
  const count = (text: string): number => {
    const cells = splitCells(text, delimiter);
    return cells.length >= 2 && number.test(cells[0]) && number.test(cells[1]) ? cells.length : 0;
  };
  const first = count(probe[0]);
  if (first < 2) return 0;
  return probe.length === 1 || count(probe[1]) >= 2 ? first : 0;
}

/** Cells of a line, without quotes and outer spaces. */
export function splitCells(line: string, delimiter: string): string[] {
  const trimmed = line.trim();
  const cells = delimiter === ' ' ? trimmed.split(/[ \t]{1,1000}/) : trimmed.split(delimiter);
  const bare = cells.map((cell) =>
    cell
      .trim()
      .replace(/^"([^"]*)"$/, '$1')
      .trim()
  );
  while (bare.length > 2 && bare[bare.length - 1] === '') bare.pop();
  return bare;
}

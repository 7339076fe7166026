import type { AxisUnit } from '../axis/units';
import type { Acquisition } from '../spectrum';
import { axisUnitOf } from './axisUnit';
import { cellsOf, isEnd, nextLine } from './cells';
import type { Layout } from './delimitedLayout';
import { StatedFields } from './statedFields';
import { words } from './textOf';

/** What the lines before the numbers say. */
export interface DelimitedHead {
  /** Titles of the columns; empty where there are none. */
  readonly titles: readonly string[];
  readonly acquisition: Acquisition;
  /** Number of points, where a line states it. */
  readonly points?: number;
  /** Unit of the axis from lines that are no titles, such as `X units: nm`; null where they say nothing. */
  readonly axisUnit: AxisUnit | null;
}

const LONGEST_LINE = 10_000;

/**
 * Reads the lines before the numbers: `name: value`, `name = value` and `name<delimiter>value` for the measurement,
 * and titles of the columns, with or without a comment mark (`#`, `%`, `;`, `//`). Titles are the last line that has
 * as many cells as the rows; a second such line right before it (names above units) is joined on.
 */
export function headOf(bytes: Uint8Array, layout: Layout): DelimitedHead {
  const fields = new StatedFields({ excitationNm: 'nm' });
  const lines = headLines(bytes, layout);
  let axisUnit: AxisUnit | null = null;
  for (const { text, cells } of lines) {
    const pair = pairOf(text) ?? (cells.length === 2 ? cells : null);
    if (!pair) continue;
    fields.add(pair[0], pair[1]);
    if (/^(x|axis|x[ _-]?axis)?[ _-]?units?$/i.test(pair[0])) axisUnit ??= axisUnitOf(pair[1]);
  }
  return {
    titles: titlesOf(lines, layout),
    acquisition: fields.acquisition(),
    points: fields.points,
    axisUnit
  };
}

interface HeadLine {
  readonly text: string;
  readonly cells: readonly string[];
}

function headLines(bytes: Uint8Array, layout: Layout): HeadLine[] {
  const lines: HeadLine[] = [];
  for (let start = 0; start < layout.dataStart; start = nextLine(bytes, start)) {
    let end = start;
    while (end < bytes.length && !isEnd(bytes[end])) end++;
    const from = pastMark(bytes, start, end);
    if (from >= end || end - from > LONGEST_LINE) continue;
    const bounds = cellsOf(bytes, from, end, layout.delimiter);
    const cells = Array.from({ length: bounds.length / 2 }, (_, k) =>
      words(bytes, bounds[2 * k], bounds[2 * k + 1])
    );
    lines.push({ text: words(bytes, from, end), cells });
  }
  return lines;
}

/** First byte after a comment mark and blanks. */
function pastMark(bytes: Uint8Array, from: number, to: number): number {
  let i = from;
  while (i < to && (bytes[i] <= 0x20 || '#%;/'.includes(String.fromCharCode(bytes[i])))) i++;
  return i;
}

/** `name: value` or `name = value`; quotes and closing delimiters aside. */
function pairOf(text: string): [name: string, value: string] | null {
  const split = text.slice(0, 120).search(/[:=]/);
  if (split < 1) return null;
  const bare = (part: string) =>
    part
      .trim()
      .replace(/^["'\s]{1,5}/, '')
      .replace(/["'\s,;|]{1,50}$/, '');
  return [bare(text.slice(0, split)), bare(text.slice(split + 1, 1000)).replace(/^[,;|]\s{0,5}/, '')];
}

function titlesOf(lines: readonly HeadLine[], layout: Layout): readonly string[] {
  const fits = (line: HeadLine | undefined) =>
    line !== undefined &&
    line.cells.length === layout.columnCount &&
    !(layout.columnCount === 2 && pairOf(line.text));
  const last = lines[lines.length - 1];
  if (!fits(last)) return [];
  const above = lines[lines.length - 2];
  const isUnits = last.cells.every((cell) => cell.length <= 12) && axisUnitOf(last.cells[0]) !== null;
  if (!isUnits || !fits(above)) return last.cells;
  return last.cells.map((unit, column) => `${above.cells[column]} (${unit})`);
}

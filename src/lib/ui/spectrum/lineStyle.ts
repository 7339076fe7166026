import type { ChartLine } from './chartTypes';

/** How a line is drawn: hue and dash both differ, so that neither alone must tell the lines apart. */
export interface LineStyle {
  readonly stroke: string;
  readonly ink: string;
  readonly dash: string | undefined;
  readonly width: number;
}

const OTHER_DASHES = ['3 3', '10 3 2 3', '6 2', '2 5', '12 4'];

/** The style of each line, in the lines' order. */
export function lineStyles(lines: readonly ChartLine[]): LineStyle[] {
  const few = lines.filter((line) => line.kind === 'other').length <= OTHER_DASHES.length;
  let others = 0;
  return lines.map((line) => {
    if (line.kind === 'scan')
      return { stroke: 'var(--pitch)', ink: 'var(--pitch)', dash: line.dash, width: 1.9 };
    if (line.kind === 'reference') {
      return { stroke: 'var(--rope)', ink: 'var(--rope-text)', dash: line.dash ?? '8 3', width: 1.9 };
    }
    // Many lines cannot be told apart by dashes, which then only cost time.
    const dash = line.dash ?? (few ? OTHER_DASHES[others++] : undefined);
    return { stroke: 'var(--logwood)', ink: 'var(--logwood)', dash, width: 1.5 };
  });
}

/** A line's offset in words, empty where it has none. */
export const offsetText = (line: ChartLine): string =>
  line.offset ? `offset ${line.offset > 0 ? '+' : '\u2212'}${Math.abs(line.offset)}` : '';

/** A line's label with its offset, where it has one. */
export const lineLabel = (line: ChartLine): string =>
  line.offset ? `${line.label} (${offsetText(line)})` : line.label;

/**
 * Indices of the lines that are named, in the lines' order: all, or of more than `most` the scan, the references and
 * the first others, with one place left to say how many more there are.
 */
export function namedLines(lines: readonly ChartLine[], most = 8): number[] {
  const order = lines.map((_, index) => index);
  if (lines.length <= most) return order;
  const first = order.filter((index) => lines[index].kind !== 'other').slice(0, most - 1);
  const rest = order.filter((index) => !first.includes(index)).slice(0, most - 1 - first.length);
  return [...first, ...rest].sort((a, b) => a - b);
}

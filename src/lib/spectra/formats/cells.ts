/** Cells of one line as byte positions: begin and end of the first, of the second, and so on; blanks and quotes off. */
export type Cells = readonly number[];

export const SPACE = 0x20;
export const TAB = 0x09;
const QUOTE = 0x22;

export const isEnd = (byte: number): boolean => byte === 0x0a || byte === 0x0d;
const isBlank = (byte: number): boolean => byte === SPACE || byte === TAB;

/** Index of the first byte of the next line. */
export function nextLine(bytes: Uint8Array, from: number): number {
  let i = from;
  while (i < bytes.length && !isEnd(bytes[i])) i++;
  return bytes[i] === 0x0d && bytes[i + 1] === 0x0a ? i + 2 : i + 1;
}

/**
 * Splits a line into cells. A cell in double quotes may hold the delimiter; empty cells at the end are left out, so
 * that a closing delimiter makes no column.
 * @param delimiter its byte; SPACE stands for any run of spaces and tabs
 */
export function cellsOf(bytes: Uint8Array, from: number, to: number, delimiter: number): Cells {
  const cells: number[] = [];
  const splits = (byte: number) => (delimiter === SPACE ? isBlank(byte) : byte === delimiter);
  for (let i = from; i <= to; i++) {
    while (i < to && isBlank(bytes[i]) && bytes[i] !== delimiter) i++;
    if (delimiter === SPACE) while (i < to && isBlank(bytes[i])) i++;
    const start = i;
    if (bytes[i] === QUOTE && i < to) {
      const close = bytes.indexOf(QUOTE, i + 1);
      if (close > 0 && close < to) i = close + 1;
    }
    while (i < to && !splits(bytes[i])) i++;
    let end = i;
    while (end > start && isBlank(bytes[end - 1])) end--;
    const quoted = end - start >= 2 && bytes[start] === QUOTE && bytes[end - 1] === QUOTE ? 1 : 0;
    cells.push(start + quoted, end - quoted);
  }
  let length = cells.length;
  while (length >= 2 && cells[length - 2] >= cells[length - 1]) length -= 2;
  return cells.slice(0, length);
}

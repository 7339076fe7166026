import { COMMA } from './decimal';
import type { Layout } from './delimitedLayout';
import type { ReadOptions, ReadProblem } from './format';
import { lineAt } from './textOf';

/**
 * Refuses a file whose every comma could as well split thousands: `1,534` is 1.534 or 1534, and the two readings are
 * different spectra. One number that can only be decimal (`0,534`, `1534,2`, `1000,123`) settles it for all.
 */
export function thousandsProblem(
  bytes: Uint8Array,
  layout: Layout,
  options: ReadOptions
): ReadProblem | null {
  if (layout.decimalMark !== COMMA || options.decimalComma === true) return null;
  const first = bytes.indexOf(COMMA, layout.dataStart);
  for (let at = first; at >= 0; at = bytes.indexOf(COMMA, at + 1))
    if (!couldSplitThousands(bytes, at)) return null;
  if (first < 0) return null;
  const message =
    'Every number with a comma could have a decimal comma or split thousands: "1,534" may be 1.534 or 1534. Say that the file has decimal commas, or export it without splitting thousands.';
  return { code: 'syntax', line: lineAt(bytes, first), message };
}

const isDigit = (byte: number | undefined) => byte !== undefined && byte >= 0x30 && byte <= 0x39;

/** One to three digits before the comma, the first of them not 0, and exactly three after it. */
function couldSplitThousands(bytes: Uint8Array, at: number): boolean {
  let before = 0;
  while (before < 4 && isDigit(bytes[at - 1 - before])) before++;
  let after = 0;
  while (after < 4 && isDigit(bytes[at + 1 + after])) after++;
  return after === 3 && before >= 1 && before <= 3 && bytes[at - before] !== 0x30;
}

import { decimalEnd, readDecimal } from './decimal';
import type { ReadProblem } from './format';

/**
 * Decoder of the ordinate table `(X++(Y..Y))` of JCAMP-DX 4.24 (McDonald & Wilks, Appl. Spectrosc. 42:151, 1988).
 * A line is an abscissa followed by ordinates in any mixture of
 *
 * - AFFN: numbers split by spaces, commas or tabs; PAC: numbers split by their signs alone;
 * - SQZ: the first digit is `@` 0, `A`..`I` 1..9, `a`..`i` -1..-9; further digits follow;
 * - DIF: a difference to the ordinate before; `%` 0, `J`..`R` 1..9, `j`..`r` -1..-9;
 * - DUP: how often the entry before stands there; `S`..`Z` 1..8, `s` 9.
 *
 * When a line ends in the DIF form, the first ordinate of the next line repeats the last one as a check value.
 *
 * Example: `1JJ%jjjjj` at x = 1 is 2 3 3 2 1 0 -1 -2 after the first 1 (x is AFFN and takes the leading digit).
 */
export interface AsdfTable {
  readonly y: Float64Array;
  /** Abscissa at the start of each line as written, with the index of the ordinate it belongs to and its line. */
  readonly starts: readonly { readonly x: number; readonly index: number; readonly line: number }[];
}

const isEnd = (byte: number) => byte === 0x0a || byte === 0x0d;

/** What a pseudo-digit is: bits 0-3 the digit, 0x10 SQZ, 0x20 DIF, 0x40 DUP, 0x80 negative. 0: none. */
const SQZ = 0x10;
const DIF = 0x20;
const DUP = 0x40;
const NEGATIVE = 0x80;
const KIND = pseudoDigits();

function pseudoDigits(): Uint8Array {
  const kind = new Uint8Array(256);
  const set = (letters: string, first: number, flags: number) => {
    for (let i = 0; i < letters.length; i++) kind[letters.charCodeAt(i)] = (first + i) | flags;
  };
  set('@ABCDEFGHI', 0, SQZ);
  set('abcdefghi', 1, SQZ | NEGATIVE);
  set('%JKLMNOPQR', 0, DIF);
  set('jklmnopqr', 1, DIF | NEGATIVE);
  set('STUVWXYZ', 1, DUP);
  set('s', 9, DUP);
  return kind;
}

/** Most points one table may have; more is a broken DUP count. */
const MAX_POINTS = 5_000_000;

/**
 * Decodes the table between two byte positions.
 * @param firstLine one-based line of the first byte
 * @param expected NPOINTS as stated, to size the result; 0 when unknown
 */
export function decodeAsdf(
  bytes: Uint8Array,
  from: number,
  to: number,
  firstLine: number,
  expected: number
): AsdfTable | { readonly problem: ReadProblem } {
  let y: Float64Array = new Float64Array(Math.max(1024, Math.min(MAX_POINTS, expected + 16)));
  const starts: { x: number; index: number; line: number }[] = [];
  let count = 0;
  let line = firstLine;
  let i = from;
  let checkDue = false;
  const fail = (code: ReadProblem['code'], message: string) => ({ problem: { code, line, message } });
  while (i < to) {
    while (i < to && (bytes[i] === 0x20 || bytes[i] === 0x09)) i++;
    if (i >= to) break;
    if (isEnd(bytes[i])) {
      i += bytes[i] === 0x0d && bytes[i + 1] === 0x0a ? 2 : 1;
      line++;
      continue;
    }
    if (bytes[i] === 0x24 && bytes[i + 1] === 0x24) {
      while (i < to && !isEnd(bytes[i])) i++;
      continue;
    }
    // `E` after an abscissa is the SQZ digit +5 unless a sign makes it an exponent.
    const abscissa = readDecimal(bytes, i, to, 0x2e, 'signed');
    if (Number.isNaN(abscissa))
      return fail('syntax', 'The line does not begin with a number. The file is damaged; export it again.');
    i = decimalEnd;
    let first = true;
    let wasDif = false;
    let last = count > 0 ? y[count - 1] : 0;
    let difference = 0;
    const lineStart = count;
    const checking = checkDue;
    while (i < to && !isEnd(bytes[i])) {
      const byte = bytes[i];
      if (byte === 0x20 || byte === 0x09 || byte === 0x2c) {
        i++;
        continue;
      }
      if (byte === 0x24 && bytes[i + 1] === 0x24) {
        while (i < to && !isEnd(bytes[i])) i++;
        break;
      }
      if (byte === 0x3f)
        return fail(
          'no-data',
          'A point is marked as missing ("?"). A spectrum with gaps cannot be judged; measure again.'
        );
      const kind = KIND[byte];
      let repeat = 1;
      if (kind === 0 && byte !== 0) {
        const value = readDecimal(bytes, i, to, 0x2e, 'signed');
        if (Number.isNaN(value))
          return fail(
            'syntax',
            `"${String.fromCharCode(byte)}" stands where an ordinate should be. The file is damaged; export it again.`
          );
        i = decimalEnd;
        last = value;
        wasDif = false;
      } else {
        let value = kind & 0x0f;
        i++;
        let digit = bytes[i] - 0x30;
        while (i < to && digit >= 0 && digit <= 9) {
          value = value * 10 + digit;
          i++;
          digit = bytes[i] - 0x30;
        }
        if (bytes[i] === 0x2e && (kind & DUP) === 0)
          return fail(
            'syntax',
            'A packed ordinate has a decimal point, which the packed forms do not allow. Export the file again.'
          );
        if (kind & DUP) {
          if (first)
            return fail(
              'syntax',
              'A repeat count stands before any ordinate. The file is damaged; export it again.'
            );
          repeat = value - 1;
        } else {
          if (kind & NEGATIVE) value = -value;
          if (kind & DIF) {
            if (first && lineStart === 0)
              return fail(
                'syntax',
                'The table begins with a difference. The file is damaged; export it again.'
              );
            difference = value;
            last += value;
            wasDif = true;
          } else {
            last = value;
            wasDif = false;
          }
        }
        if (kind & DUP) {
          if (count + repeat > MAX_POINTS)
            return fail(
              'syntax',
              'A repeat count is impossibly large. The file is damaged; export it again.'
            );
          if (count + repeat >= y.length) y = grown(y, count + repeat);
          for (let k = 0; k < repeat; k++) {
            if (wasDif) last += difference;
            y[count++] = last;
          }
          continue;
        }
      }
      if (first && checking) {
        if (last !== y[count - 1])
          return fail(
            'check-failed',
            `The check value ${last} does not repeat the last ordinate ${y[count - 1]} of the line before. The file is damaged; export it again.`
          );
        starts.push({ x: abscissa, index: count - 1, line });
        first = false;
        continue;
      }
      if (first) starts.push({ x: abscissa, index: count, line });
      first = false;
      if (count >= MAX_POINTS)
        return fail('syntax', 'The table has more points than any spectrum. Export a single spectrum.');
      if (count >= y.length) y = grown(y, count);
      y[count++] = last;
    }
    checkDue = wasDif;
  }
  // In the DIF form the last line may hold the check value alone; it added no point.
  return { y: y.slice(0, count), starts };
}

function grown(values: Float64Array, needed: number): Float64Array {
  const larger = new Float64Array(Math.max(values.length * 2, needed + 1024));
  larger.set(values);
  return larger;
}

/** Powers of ten that a float64 holds exactly. */
const EXACT = Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));

/** Where the last number read ended (index of the first byte after it); valid until the next call. */
export let decimalEnd = 0;

/** In packed tables a bare `E` is a digit, so there an exponent needs its sign. */
export type Exponent = 'any' | 'signed' | 'none';

/**
 * Reads a decimal number straight from bytes: sign, digits, one decimal mark, exponent. Bit-equal to `Number()`
 * of the same text: up to 15 significant digits and a power of ten up to 22 are exact in one float64 operation
 * (Clinger 1990); everything else is handed to `Number()`.
 * @param mark byte of the decimal mark (0x2e point, 0x2c comma)
 * @param exponent when `E` begins an exponent: always where digits follow, only with a sign, or never
 * @returns NaN where no number begins at `from`
 */
export function readDecimal(
  bytes: Uint8Array,
  from: number,
  to: number,
  mark = 0x2e,
  exponent: Exponent = 'any'
): number {
  let i = from;
  let negative = false;
  if (bytes[i] === 0x2d || bytes[i] === 0x2b) negative = bytes[i++] === 0x2d;
  let mantissa = 0;
  let digits = 0;
  let seen = 0;
  let scale = 0;
  let afterMark = false;
  for (; i < to; i++) {
    const digit = bytes[i] - 0x30;
    if (digit >= 0 && digit <= 9) {
      if (mantissa !== 0 || digit !== 0) digits++;
      mantissa = mantissa * 10 + digit;
      if (afterMark) scale++;
      seen++;
    } else if (bytes[i] === mark && !afterMark) {
      afterMark = true;
    } else break;
  }
  if (seen === 0) {
    decimalEnd = from;
    return NaN;
  }
  let power = 0;
  if (exponent !== 'none' && i < to && (bytes[i] | 0x20) === 0x65) {
    const signed = bytes[i + 1] === 0x2b || bytes[i + 1] === 0x2d;
    const end = signed || exponent === 'any' ? exponentEnd(bytes, i, to) : i;
    if (end > i) {
      power = exponentValue(bytes, i + 1, end);
      i = end;
    }
  }
  decimalEnd = i;
  const ten = power - scale;
  if (digits <= 15 && ten >= -22 && ten <= 22) {
    const value = ten < 0 ? mantissa / EXACT[-ten] : mantissa * EXACT[ten];
    return negative ? -value : value;
  }
  return slowDecimal(bytes, from, i, mark);
}

function exponentEnd(bytes: Uint8Array, at: number, to: number): number {
  let i = at + 1;
  if (bytes[i] === 0x2b || bytes[i] === 0x2d) i++;
  const first = i;
  while (i < to && bytes[i] >= 0x30 && bytes[i] <= 0x39) i++;
  return i > first ? i : at;
}

function exponentValue(bytes: Uint8Array, from: number, to: number): number {
  const negative = bytes[from] === 0x2d;
  let value = 0;
  for (let i = negative || bytes[from] === 0x2b ? from + 1 : from; i < to; i++) {
    value = Math.min(9999, value * 10 + bytes[i] - 0x30);
  }
  return negative ? -value : value;
}

function slowDecimal(bytes: Uint8Array, from: number, to: number, mark: number): number {
  let text = '';
  for (let i = from; i < to; i++) text += bytes[i] === mark ? '.' : String.fromCharCode(bytes[i]);
  return Number(text);
}

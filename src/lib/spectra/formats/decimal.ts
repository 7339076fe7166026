/** In packed tables a bare `E` is a digit, so there an exponent needs its sign. */
export type Exponent = 'any' | 'signed';

export const POINT = 0x2e;
export const COMMA = 0x2c;
const PLUS = 0x2b;
const MINUS = 0x2d;

/** Powers of ten that a float64 holds exactly. */
const TEN = Float64Array.from({ length: 23 }, (_, i) => Number(`1e${i}`));
/** Digits that fit a 32-bit integer whatever they are. */
const CHUNK = 9;

/**
 * Reads decimal numbers straight from bytes: sign, digits, one decimal mark, exponent. Every value is bit-equal to
 * `Number()` of the same text: digits that make a whole number below 2^53, times or by a power of ten up to 22, are
 * two exact float64 values and one correctly rounded operation (Clinger, PLDI 1990); all else is left to `Number()`.
 *
 * Digits are gathered as two 32-bit integers of nine, since integer arithmetic is what makes the loop fast.
 *
 * Example: `-12.50e1,` gives -125 and leaves `end` at the comma.
 */
export class DecimalReader {
  /** Index of the first byte after the number read last; where none began, the index that was asked for. */
  end = 0;
  /** Power of ten of that number's last written figure: -2 for 12.50. */
  lastPlace = 0;

  /** @param mark byte of the decimal mark: POINT or COMMA */
  constructor(
    private readonly bytes: Uint8Array,
    private readonly mark: number = POINT,
    private readonly exponent: Exponent = 'any'
  ) {}

  /** The number that begins at `from` and ends before `to`, or NaN where none begins there. */
  read(from: number, to: number): number {
    const bytes = this.bytes;
    let i = from;
    let byte = i < to ? bytes[i] : 0;
    const negative = byte === MINUS;
    if (negative || byte === PLUS) i++;
    const first = i;
    let high = 0;
    let low = 0;
    let digits = 0;
    let marked = -1;
    for (; i < to; i++) {
      byte = bytes[i];
      const digit = byte - 0x30;
      if (digit >= 0 && digit <= 9) {
        if (digits < CHUNK) high = (Math.imul(high, 10) + digit) | 0;
        else if (digits < 2 * CHUNK) low = (Math.imul(low, 10) + digit) | 0;
        digits++;
      } else if (byte === this.mark && marked < 0) marked = i;
      else break;
    }
    if (digits === 0) {
      this.end = from;
      return NaN;
    }
    let ten = marked < 0 ? 0 : marked + 1 - i;
    if (i < to && (bytes[i] | 0x20) === 0x65) {
      const end = this.exponentEnd(i, to);
      if (end > i) {
        ten += this.exponentValue(i + 1, end);
        i = end;
      }
    }
    this.end = i;
    this.lastPlace = ten;
    const whole = digits <= CHUNK ? high : high * TEN[Math.min(digits, 2 * CHUNK) - CHUNK] + low;
    if (digits > 2 * CHUNK || whole > Number.MAX_SAFE_INTEGER || ten < -22 || ten > 22) {
      const value = Number(this.text(first, i));
      return negative ? -value : value;
    }
    const value = ten === 0 ? whole : ten < 0 ? whole / TEN[-ten] : whole * TEN[ten];
    return negative ? -value : value;
  }

  /** True when the bytes from `from` to `to` are one number and nothing else. */
  isNumber(from: number, to: number): boolean {
    return from < to && !Number.isNaN(this.read(from, to)) && this.end === to;
  }

  /** End of the exponent that begins with the `E` at `at`; `at` itself when it is none. */
  private exponentEnd(at: number, to: number): number {
    let i = at + 1;
    const signed = i < to && (this.bytes[i] === PLUS || this.bytes[i] === MINUS);
    if (signed) i++;
    else if (this.exponent === 'signed') return at;
    const first = i;
    while (i < to && this.bytes[i] >= 0x30 && this.bytes[i] <= 0x39) i++;
    return i > first ? i : at;
  }

  private exponentValue(from: number, to: number): number {
    const negative = this.bytes[from] === MINUS;
    let value = 0;
    for (let i = negative || this.bytes[from] === PLUS ? from + 1 : from; i < to; i++)
      value = Math.min(99_999, value * 10 + this.bytes[i] - 0x30);
    return negative ? -value : value;
  }

  private text(from: number, to: number): string {
    const letters: string[] = [];
    for (let i = from; i < to; i++)
      letters.push(this.bytes[i] === this.mark ? '.' : String.fromCharCode(this.bytes[i]));
    return letters.join('');
  }
}

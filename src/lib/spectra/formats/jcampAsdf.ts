import { DIGIT, SQZ, DIF, DUP, NEGATIVE, LETTER, GAP, LINE_END, KIND } from './asdfBytes';
import { DecimalReader, POINT } from './decimal';
import type { ReadProblem } from './format';
import { latin1, lineAt, shown } from './textOf';

/** The abscissae that stand at the starts of lines, with the ordinate each belongs to. */
export interface LineStarts {
  /** As written, without XFACTOR. */
  readonly x: readonly number[];
  /** Power of ten of the last written figure: -2 for 12.50. */
  readonly place: readonly number[];
  readonly index: readonly number[];
  /** Position of the line in the bytes. */
  readonly at: readonly number[];
}

export interface AsdfTable {
  /** Ordinates as written, without YFACTOR. */
  readonly y: Float64Array;
  readonly starts: LineStarts;
}

/** Most points one table may have: far above any spectrum, far below what a broken repeat count asks for. */
const MAX_POINTS = 4_000_000;
/** Ordinates are whole numbers in the packed forms; beyond this their sums are no longer exact. */
const LARGEST = Number.MAX_SAFE_INTEGER;

const INTEGER_DIGITS = 9;
const DOLLAR = 0x24;
const isEnd = (byte: number) => byte === 0x0a || byte === 0x0d;
const isBlank = (byte: number) => byte === 0x20 || byte === 0x09;

/**
 * Decodes the ordinate table `(X++(Y..Y))` of JCAMP-DX 4.24 (McDonald & Wilks, Appl. Spectrosc. 42:151, 1988,
 * sections 5.8 and 5.9). A line is an abscissa followed by ordinates in any mixture of
 *
 * - AFFN: numbers split by spaces, commas or tabs; PAC: numbers split by their signs alone;
 * - SQZ: the first digit is `@` 0, `A`..`I` 1..9, `a`..`i` -1..-9; further digits follow;
 * - DIF: a difference to the ordinate before; `%` 0, `J`..`R` 1..9, `j`..`r` -1..-9;
 * - DUP: how often the entry before stands there in all; `S`..`Z` 1..8, `s` 9; after a difference, the difference.
 *
 * After an abscissa or an ordinate `E` is the SQZ digit +5, unless a sign and figures follow: then an exponent. When a
 * line ends in DIF form, the first ordinate of the next line must repeat the last one: the check value, no new point.
 *
 * Example: the lines `1A2JT%` and `6A4B` are the ordinates 12, 13, 14, 14 and 2: `A2` is 12, `JT` is +1 twice, `%`
 * is +0; `A4` confirms the 14 and `B` is 2. The abscissa 6 would be refused by the axis: the check stands at x = 4.
 */
export function decodeAsdf(
  bytes: Uint8Array,
  from: number,
  to: number,
  expected = 0
): AsdfTable | { readonly problem: ReadProblem } {
  return new AsdfDecoder(bytes, to, expected).decode(from);
}

class AsdfDecoder {
  private readonly numbers: DecimalReader;
  private readonly starts = {
    x: [] as number[],
    place: [] as number[],
    index: [] as number[],
    at: [] as number[]
  };
  private problem: ReadProblem | null = null;
  private y: Float64Array;
  private count = 0;
  /** The line before ended in the DIF form, so that a check value is due. */
  private checkDue = false;
  /** A packed number of ten digits or more was seen: sums may have left the exact whole numbers. */
  private long = false;

  constructor(
    private readonly bytes: Uint8Array,
    private readonly to: number,
    expected: number
  ) {
    this.numbers = new DecimalReader(bytes, POINT, 'signed');
    this.y = new Float64Array(Math.max(1024, Math.min(MAX_POINTS, expected) + 1));
  }

  decode(from: number): AsdfTable | { readonly problem: ReadProblem } {
    let i = from;
    while (i < this.to && this.problem === null) {
      const byte = this.bytes[i];
      if (isBlank(byte) || isEnd(byte)) i++;
      else if (byte === DOLLAR && this.bytes[i + 1] === DOLLAR) i = this.lineEnd(i);
      else i = this.line(i);
    }
    if (this.problem) return { problem: this.problem };
    const y = this.y.slice(0, this.count);
    if (this.long && y.some((value) => Math.abs(value) > LARGEST)) {
      const message = 'Ordinates are larger than whole numbers can be exact. Export the file again.';
      return { problem: { code: 'syntax', message, line: lineAt(this.bytes, from) } };
    }
    return { y, starts: this.starts };
  }

  /** One line: abscissa, check value where one is due, ordinates. Returns where the line ends. */
  private line(at: number): number {
    const abscissa = this.numbers.read(at, this.to);
    if (!Number.isFinite(abscissa))
      return this.fail('syntax', at, 'stands where a line must begin with a number');
    const place = this.numbers.lastPlace;
    let i = this.numbers.end;
    while (i < this.to && KIND[this.bytes[i]] === GAP) i++;
    const kind = i < this.to ? KIND[this.bytes[i]] : LINE_END;
    if (kind === LINE_END) return this.fail('syntax', at, 'is an abscissa without ordinates');
    if (isMissing(this.bytes, i, this.to)) return this.noNumber(i);
    if (kind & (DIF | DUP))
      return this.fail('syntax', i, 'refers to an ordinate before it on the line, and there is none');
    // The check value is decoded over the last point: it must be the same and adds none.
    const checking = this.checkDue;
    const confirmed = checking ? this.y[--this.count] : 0;
    const first = this.count;
    this.starts.x.push(abscissa);
    this.starts.place.push(place);
    this.starts.index.push(first);
    this.starts.at.push(at);
    const end = this.ordinates(i);
    if (this.problem !== null || !checking || this.y[first] === confirmed) return end;
    const message = `The check value ${this.y[first]} does not repeat the last ordinate ${confirmed} of the line before. The file is damaged; export it again.`;
    this.problem = { code: 'check-failed', line: lineAt(this.bytes, at), message };
    return end;
  }

  /** The ordinates of a line from the first one to the line's end, which is returned. */
  private ordinates(from: number): number {
    const { bytes, to, numbers } = this;
    let y = this.y;
    let count = this.count;
    let last = 0;
    let step = 0;
    let form = SQZ;
    let i = from;
    while (i < to) {
      const at = i;
      const kind = KIND[bytes[i]];
      if (kind & (SQZ | DIF | DUP)) {
        let figures = kind & DIGIT;
        for (i++; i < to; i++) {
          const digit = bytes[i] - 0x30;
          if (digit < 0 || digit > 9) break;
          figures = (Math.imul(figures, 10) + digit) | 0;
        }
        let value = i - at <= INTEGER_DIGITS ? figures : this.longNumber(at, i);
        if (kind & (DUP | LETTER)) {
          if (kind & DUP) {
            if (value === 0 || count + value > MAX_POINTS || (i < to && KIND[bytes[i]] & DUP))
              return this.fail('syntax', at, 'is no repeat count');
            if (count + value > y.length) y = this.grow(count + value);
            const add = form & DIF ? step : 0;
            for (let k = 1; k < value; k++) y[count++] = last += add;
            continue;
          }
          if (isMissing(bytes, at, to)) return this.noNumber(at);
        }
        if (kind & NEGATIVE) value = -value;
        if (kind & DIF) {
          step = value;
          last += value;
        } else last = value;
        form = kind;
      } else if (kind === GAP) {
        i++;
        continue;
      } else if (kind === LINE_END) break;
      else if (bytes[i] === DOLLAR && bytes[i + 1] === DOLLAR) {
        i = this.lineEnd(i);
        break;
      } else {
        last = numbers.read(i, to);
        if (!Number.isFinite(last) || (bytes[i] === POINT && KIND[bytes[i - 1]] !== GAP))
          return this.noNumber(i);
        i = numbers.end;
        form = SQZ;
      }
      if (count >= y.length) y = this.grow(count + 1);
      y[count++] = last;
    }
    this.count = count;
    this.checkDue = (form & DIF) !== 0;
    return i;
  }

  /** A packed number of more digits than a 32-bit integer is sure to hold. */
  private longNumber(at: number, end: number): number {
    this.long = true;
    return Number(String(KIND[this.bytes[at]] & DIGIT) + latin1(this.bytes, at + 1, end));
  }

  private grow(needed: number): Float64Array {
    if (needed > MAX_POINTS) {
      this.fail(
        'syntax',
        this.starts.at[this.starts.at.length - 1],
        'begins a line beyond the most points of a spectrum'
      );
      return this.y;
    }
    const larger = new Float64Array(Math.max(needed, this.y.length * 2));
    larger.set(this.y);
    return (this.y = larger);
  }

  private lineEnd(from: number): number {
    let i = from;
    while (i < this.to && !isEnd(this.bytes[i])) i++;
    return i;
  }

  private noNumber(at: number): number {
    if (this.bytes[at] !== 0x3f && !isMissing(this.bytes, at, this.to))
      return this.fail('syntax', at, 'stands where an ordinate should be');
    return this.fail('no-data', at, 'marks a point without a value');
  }

  /** Keeps the first problem; the decoder stops at the position returned. */
  private fail(code: ReadProblem['code'], at: number, what: string): number {
    const { bytes, to } = this;
    const message = `${shown(bytes, at, Math.min(to, this.lineEnd(at)))} ${what}. The file is damaged or incomplete; export it again.`;
    this.problem ??= { code, line: lineAt(bytes, at), message };
    return to;
  }
}

/** Words that some writers put for a missing value, and whose letters would otherwise be read as pseudo-digits. */
function isMissing(bytes: Uint8Array, at: number, to: number): boolean {
  const letter = bytes[at] | 0x20;
  if ((letter !== 0x6e && letter !== 0x69) || at + 2 >= to) return false;
  const word = String.fromCharCode(letter, bytes[at + 1] | 0x20, bytes[at + 2] | 0x20);
  return word === 'nan' || word === 'inf';
}

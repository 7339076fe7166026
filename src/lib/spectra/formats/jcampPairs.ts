import { decimalEnd, readDecimal } from './decimal';
import type { ReadProblem } from './format';

const isEnd = (byte: number) => byte === 0x0a || byte === 0x0d;

/** Decodes `(XY..XY)` points: x and y split by comma or spaces, points by semicolons, spaces or line ends. */
export function decodePairs(
  bytes: Uint8Array,
  from: number,
  to: number,
  firstLine: number
): { readonly x: Float64Array; readonly y: Float64Array } | { readonly problem: ReadProblem } {
  const numbers: number[] = [];
  let line = firstLine;
  for (let i = from; i < to;) {
    const byte = bytes[i];
    if (isEnd(byte)) {
      i += byte === 0x0d && bytes[i + 1] === 0x0a ? 2 : 1;
      line++;
    } else if (byte === 0x20 || byte === 0x09 || byte === 0x2c || byte === 0x3b) {
      i++;
    } else if (byte === 0x24 && bytes[i + 1] === 0x24) {
      while (i < to && !isEnd(bytes[i])) i++;
    } else {
      const value = readDecimal(bytes, i, to);
      if (Number.isNaN(value)) {
        const message = `"${String.fromCharCode(byte).replace(/[^ -~]/, '?')}" stands where a number should be. The file is damaged; export it again.`;
        return { problem: { code: 'syntax', line, message } };
      }
      numbers.push(value);
      i = decimalEnd;
    }
  }
  if (numbers.length % 2 === 1)
    return {
      problem: {
        code: 'syntax',
        line,
        message: 'The last point has an abscissa without an ordinate. The file is cut short; export it again.'
      }
    };
  const x = new Float64Array(numbers.length / 2);
  const y = new Float64Array(numbers.length / 2);
  for (let k = 0; k < x.length; k++) {
    x[k] = numbers[2 * k];
    y[k] = numbers[2 * k + 1];
  }
  return { x, y };
}

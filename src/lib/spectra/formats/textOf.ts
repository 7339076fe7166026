import type { ReadProblem } from './format';

/** Largest file that is read, bytes. */
export const MAX_FILE_BYTES = 20 * 1024 * 1024;

const SIGNATURES: readonly { readonly head: readonly number[]; readonly name: string }[] = [
  { head: [0x89, 0x50, 0x4e, 0x47], name: 'a PNG picture' },
  { head: [0xff, 0xd8, 0xff], name: 'a JPEG picture' },
  { head: [0x25, 0x50, 0x44, 0x46], name: 'a PDF document' },
  { head: [0x50, 0x4b, 0x03, 0x04], name: 'a ZIP archive or an office document' },
  { head: [0x1f, 0x8b], name: 'a gzip archive' },
  { head: [0x47, 0x49, 0x46, 0x38], name: 'a GIF picture' },
  { head: [0xd0, 0xcf, 0x11, 0xe0], name: 'an office document' }
];

const HEAD_BYTES = 4096;

/**
 * Says why bytes cannot be a text file with a spectrum, or gives them as single-byte text: UTF-16 with a byte
 * order mark is turned into UTF-8, a UTF-8 mark is cut off, anything else is left as it is.
 */
export function textOf(
  bytes: Uint8Array
): { readonly bytes: Uint8Array } | { readonly problem: ReadProblem } {
  if (bytes.length === 0)
    return { problem: { code: 'empty', message: 'The file is empty. Export the spectrum again.' } };
  if (bytes.length > MAX_FILE_BYTES) {
    return {
      problem: {
        code: 'too-large',
        message: 'The file is larger than 20 MB. Export a single spectrum as JCAMP-DX or delimited text.'
      }
    };
  }
  const utf16 =
    bytes[0] === 0xff && bytes[1] === 0xfe
      ? 'utf-16le'
      : bytes[0] === 0xfe && bytes[1] === 0xff
        ? 'utf-16be'
        : null;
  if (utf16) return { bytes: new TextEncoder().encode(decodeUtf16(bytes.subarray(2), utf16 === 'utf-16le')) };
  for (const { head, name } of SIGNATURES) {
    if (head.every((byte, i) => bytes[i] === byte)) {
      return {
        problem: {
          code: 'not-text',
          message: `The file is ${name}, not a spectrum. Export the spectrum as JCAMP-DX or delimited text.`
        }
      };
    }
  }
  const head = bytes.subarray(0, HEAD_BYTES);
  if (head.includes(0)) {
    return {
      problem: {
        code: 'not-text',
        message: 'The file is not text. Export the spectrum as JCAMP-DX or delimited text.'
      }
    };
  }
  const marked = bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf;
  return { bytes: marked ? bytes.subarray(3) : bytes };
}

function decodeUtf16(bytes: Uint8Array, littleEndian: boolean): string {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const pieces: string[] = [];
  for (let i = 0; i + 1 < bytes.length; i += 2)
    pieces.push(String.fromCharCode(view.getUint16(i, littleEndian)));
  return pieces.join('');
}

/** Bytes as Latin-1 text: every byte one character, so that positions in bytes and in text are the same. */
export function latin1(bytes: Uint8Array, from = 0, to = bytes.length): string {
  let text = '';
  for (let i = from; i < to; i += 8192)
    text += String.fromCharCode(...bytes.subarray(i, Math.min(i + 8192, to)));
  return text;
}

import type { ReadProblem } from './format';

/** Largest file that is read, bytes. */
export const MAX_FILE_BYTES = 20 * 1024 * 1024;

/** First bytes of files that people mistake for an export, and what they are called. */
const SIGNATURES: readonly { readonly head: readonly number[]; readonly name: string }[] = [
  { head: [0x89, 0x50, 0x4e, 0x47], name: 'a PNG picture' },
  { head: [0xff, 0xd8, 0xff], name: 'a JPEG picture' },
  { head: [0x47, 0x49, 0x46, 0x38], name: 'a GIF picture' },
  { head: [0x49, 0x49, 0x2a, 0x00], name: 'a TIFF picture' },
  { head: [0x4d, 0x4d, 0x00, 0x2a], name: 'a TIFF picture' },
  { head: [0x25, 0x50, 0x44, 0x46], name: 'a PDF document' },
  { head: [0x7b, 0x5c, 0x72, 0x74, 0x66], name: 'a word-processor document' },
  { head: [0x50, 0x4b, 0x03, 0x04], name: 'a ZIP archive or an office document' },
  { head: [0xd0, 0xcf, 0x11, 0xe0], name: 'an office document' },
  { head: [0x1f, 0x8b], name: 'a gzip archive' },
  { head: [0x37, 0x7a, 0xbc, 0xaf], name: 'a 7z archive' },
  { head: [0x89, 0x48, 0x44, 0x46], name: 'an HDF5 data file' }
];

const AS_TEXT = 'Export the spectrum as JCAMP-DX or delimited text.';
const notText = (what: string, line?: number) => ({
  problem: { code: 'not-text', message: `${what} ${AS_TEXT}`, line } as const
});

/**
 * Says why bytes cannot be a text file with a spectrum, or gives them as text of one byte a figure: UTF-16 with a
 * byte order mark is turned into UTF-8, a UTF-8 mark and an old end-of-file mark (Ctrl-Z) are cut off, anything else
 * is left as it is, so that Latin-1 in a header does no harm.
 */
export function textOf(
  bytes: Uint8Array
): { readonly bytes: Uint8Array } | { readonly problem: ReadProblem } {
  if (bytes.length > MAX_FILE_BYTES) {
    const message = `The file is larger than ${MAX_FILE_BYTES / 1024 / 1024} MB. Export a single spectrum as JCAMP-DX or delimited text.`;
    return { problem: { code: 'too-large', message } };
  }
  const found = SIGNATURES.find(({ head }) => head.every((byte, i) => bytes[i] === byte));
  if (found) return notText(`The file is ${found.name}, not a spectrum.`);
  const text = decoded(bytes);
  if ('problem' in text) return text;
  if (isBlank(text.bytes))
    return { problem: { code: 'empty', message: 'The file is empty. Export the spectrum again.' } };
  const zero = text.bytes.indexOf(0);
  if (zero < 0) return text;
  const line = lineAt(text.bytes, zero);
  return line === 1 && zero < 64
    ? notText('The file is not text: it holds bytes that are no letters and no figures.')
    : notText('A zero byte stands in the text: the file is damaged or not text.', line);
}

function decoded(bytes: Uint8Array): { readonly bytes: Uint8Array } | { readonly problem: ReadProblem } {
  const [a, b, c] = bytes;
  const wide = a === 0xff && b === 0xfe ? 'utf-16le' : a === 0xfe && b === 0xff ? 'utf-16be' : null;
  if (wide === null) {
    const from = a === 0xef && b === 0xbb && c === 0xbf ? 3 : 0;
    const to = bytes.length > from && bytes[bytes.length - 1] === 0x1a ? bytes.length - 1 : bytes.length;
    return { bytes: bytes.subarray(from, to) };
  }
  if (bytes.length % 2 === 1)
    return notText('The file is UTF-16 text that ends within a letter: it is cut short.');
  return { bytes: new TextEncoder().encode(new TextDecoder(wide).decode(bytes)) };
}

function isBlank(bytes: Uint8Array): boolean {
  for (let i = 0; i < bytes.length; i++) if (bytes[i] > 0x20 || bytes[i] === 0) return false;
  return true;
}

/** One-based line of a byte; lines end in CR, LF or both. */
export function lineAt(bytes: Uint8Array, position: number): number {
  let line = 1;
  for (let i = 0; i < position; i++)
    if (bytes[i] === 0x0a ? bytes[i - 1] !== 0x0d : bytes[i] === 0x0d) line++;
  return line;
}

/** Bytes as Latin-1 text: every byte one character, so that positions in bytes and in text are the same. */
export function latin1(bytes: Uint8Array, from = 0, to = bytes.length): string {
  const pieces: string[] = [];
  for (let i = from; i < to; i += 8192)
    pieces.push(String.fromCharCode(...bytes.subarray(i, Math.min(i + 8192, to))));
  return pieces.join('');
}

const strictUtf8 = new TextDecoder('utf-8', { fatal: true });

/** Words of a header fit to be shown: UTF-8 where it is UTF-8, else Latin-1; control characters become spaces. */
export function words(bytes: Uint8Array, from: number, to: number): string {
  const piece = bytes.subarray(from, to);
  let text: string;
  try {
    text = strictUtf8.decode(piece);
  } catch {
    text = latin1(piece);
  }
  // eslint-disable-next-line no-control-regex -- control characters of a file must not reach a page or a log
  return text.replaceAll(/[\u0000-\u001f\u007f-\u009f\u2028\u2029\u202a-\u202e\u2066-\u2069]/g, ' ').trim();
}

/** A few bytes of a damaged place, quoted for a message; what cannot be printed shows as a question mark. */
export function shown(bytes: Uint8Array, from: number, to: number): string {
  const text = latin1(bytes, from, Math.min(to, from + 24)).replaceAll(/[^ -~]/g, '?');
  return `"${text}${to > from + 24 ? '...' : ''}"`;
}

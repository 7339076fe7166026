import { checkSpectrum } from '../spectrum';
import { delimitedText } from './delimitedText';
import type { ReadOptions, ReadOutcome, SpectrumFormat } from './format';
import { jcampDx } from './jcampDx';
import { textOf } from './textOf';

/** The formats that are read, tried in this order. A new format is its file and a line here. */
export const FORMATS = [jcampDx, delimitedText] as const satisfies readonly SpectrumFormat[];

/** How much of a file a format may look at to recognise it, bytes. */
const HEAD_BYTES = 16_384;

/**
 * Reads a spectrum from a file's bytes: is it text, which format, what does it say, is that a sound spectrum? A file
 * is read whole or refused whole, with what was wrong and on which line; what was assumed is told in `notes`. Never
 * throws, whatever the bytes.
 */
export function readSpectrumFile(bytes: Uint8Array, options: ReadOptions = {}): ReadOutcome {
  const text = textOf(bytes);
  if ('problem' in text) return { ok: false, problem: text.problem };
  const head = text.bytes.subarray(0, HEAD_BYTES);
  const format = FORMATS.find((candidate) => candidate.sniff(head));
  if (!format) {
    const message =
      'The file is a web page or program data, not a spectrum. Export the spectrum as JCAMP-DX or delimited text.';
    return { ok: false, problem: { code: 'unknown-format', message } };
  }
  const outcome = format.read(text.bytes, options);
  if (!outcome.ok) return outcome;
  const fault = checkSpectrum(outcome.spectrum);
  if (!fault) return outcome;
  const message = `${fault.message} Export the spectrum again.`;
  return { ok: false, problem: { code: 'spectrum-fault', message } };
}

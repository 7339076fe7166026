import { checkSpectrum } from '../spectrum';
import { delimitedText } from './delimitedText';
import type { ReadOptions, ReadOutcome, SpectrumFormat } from './format';
import { jcampDx } from './jcampDx';
import { textOf } from './textOf';

/** The formats that are read, tried in this order. A new format is its file and a line here. */
export const FORMATS = [jcampDx, delimitedText] as const satisfies readonly SpectrumFormat[];

/**
 * Reads a spectrum from a file's bytes: sniffs the format, reads it, and refuses what is no sound spectrum. What
 * was assumed is told in `notes`. Never throws, whatever the bytes.
 */
export function readSpectrumFile(bytes: Uint8Array, options: ReadOptions = {}): ReadOutcome {
  const text = textOf(bytes);
  if ('problem' in text) return { ok: false, problem: text.problem };
  const head = text.bytes.subarray(0, 4096);
  const format = FORMATS.find((candidate) => candidate.sniff(head)) ?? delimitedText;
  const outcome = format.read(text.bytes, options);
  if (!outcome.ok) return outcome;
  const fault = checkSpectrum(outcome.spectrum);
  if (fault)
    return {
      ok: false,
      problem: { code: 'spectrum-fault', message: `${fault.message} Export the spectrum again.` }
    };
  return outcome;
}

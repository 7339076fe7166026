import type { Acquisition, Spectrum } from '../spectrum';

/** How the user may override what the reader would guess. Every field absent: guess, and report the guess. */
export interface ReadOptions {
  /** Which block of a file with several (zero-based). */
  readonly block?: number;
  /** Excitation wavelength in nm, needed where the axis is a wavelength and the file does not state it. */
  readonly excitationNm?: number;
  /** Unit of the axis; by default read from the file, else Raman shift. */
  readonly axisUnit?: 'cm-1' | 'nm';
  /** Delimited text only. */
  readonly delimiter?: ',' | ';' | '\t' | ' ' | '|';
  readonly decimalComma?: boolean;
  /** Zero-based columns of axis and intensity in delimited text. */
  readonly axisColumn?: number;
  readonly intensityColumn?: number;
}

/** Why a file cannot be read: plain words for a person at a dock, with the line where it went wrong. */
export interface ReadProblem {
  readonly code:
    | 'empty'
    | 'too-large'
    | 'not-text'
    | 'unknown-format'
    | 'syntax'
    | 'no-data'
    | 'check-failed'
    | 'count-mismatch'
    | 'unit-unknown'
    | 'excitation-needed'
    | 'choice-needed'
    | 'spectrum-fault';
  /** What happened, and what to do. One or two sentences. */
  readonly message: string;
  /** One-based line in the file. */
  readonly line?: number;
  /** With `choice-needed`: what there is to choose from (blocks of the file). */
  readonly choices?: readonly string[];
}

export interface ReadSpectrum {
  readonly ok: true;
  readonly format: 'jcamp-dx' | 'delimited-text';
  readonly spectrum: Spectrum;
  readonly acquisition: Acquisition;
  /** What was assumed or noticed, in words fit to show: columns chosen, delimiter, axis reversed, MAXY off … */
  readonly notes: readonly string[];
}

export type ReadOutcome = ReadSpectrum | { readonly ok: false; readonly problem: ReadProblem };

/** One file format: how to recognise it and how to read it. */
export interface SpectrumFormat {
  readonly name: ReadSpectrum['format'];
  /** Cheap look at the first bytes; true if this reader should try. */
  sniff(head: Uint8Array): boolean;
  read(bytes: Uint8Array, options: ReadOptions): ReadOutcome;
}

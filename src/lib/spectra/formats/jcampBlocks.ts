import type { ReadOptions, ReadProblem } from './format';
import { problemAt, type Block, type LabelledRecord } from './jcampLabels';

export interface ChosenBlock {
  readonly block: Block;
  /** The record whose value is the data table. */
  readonly data: LabelledRecord;
  readonly notes: string[];
}

const DATA_LABELS = ['XYDATA', 'XYPOINTS', 'DATATABLE'];
/** More titles than anyone chooses from. */
const MAX_CHOICES = 200;

const dataOf = (block: Block): LabelledRecord[] =>
  block.records.filter((record) => DATA_LABELS.includes(record.label));

/**
 * The one block with a spectrum; with several, the one asked for, else a question. Of an NTUPLES block the first page
 * counts. A block with two tables is refused: there is no telling which one is meant.
 */
export function chooseBlock(
  bytes: Uint8Array,
  blocks: readonly Block[],
  options: ReadOptions
): ChosenBlock | { readonly problem: ReadProblem } {
  const filled = blocks.filter((block) => dataOf(block).length > 0);
  if (filled.length === 0) return { problem: { code: 'no-data', message: nothingIn(blocks) } };
  if (filled.length > 1 ? options.block === undefined : (options.block ?? 0) > 0) return question(filled);
  const block = filled[options.block ?? 0];
  if (!block) return question(filled);
  const [data, second] = dataOf(block);
  const paged = block.records.some((record) => record.label === 'NTUPLES');
  if (second && !paged) {
    const message =
      'The block holds a second data table, and only one can be its spectrum. Export a single spectrum.';
    return problemAt(bytes, second, 'syntax', message);
  }
  const notes: string[] = [];
  if (filled.length > 1) {
    const title = block.title === '' ? '' : ` ("${block.title.slice(0, 80)}")`;
    notes.push(
      `Spectrum ${(options.block ?? 0) + 1} of ${filled.length} in the file${title} was taken, as chosen.`
    );
  }
  if (second) notes.push(`The first of ${dataOf(block).length} pages was taken.`);
  return { block, data, notes };
}

function nothingIn(blocks: readonly Block[]): string {
  const peaks = blocks.some((block) => block.records.some((record) => record.label.startsWith('PEAK')));
  return peaks
    ? 'The file holds a table of peaks, not a spectrum. Export the spectrum itself.'
    : 'The file holds no spectrum: no XYDATA, XYPOINTS or NTUPLES. Export the spectrum itself.';
}

function question(blocks: readonly Block[]): { readonly problem: ReadProblem } {
  const choices = blocks
    .slice(0, MAX_CHOICES)
    .map((block, i) => block.title.slice(0, 80) || `Spectrum ${i + 1}`);
  const message =
    blocks.length === 1
      ? 'The file holds one spectrum only. Read it without choosing.'
      : `The file holds ${blocks.length} spectra. Choose which one to read.`;
  return { problem: { code: 'choice-needed', message, choices } };
}

import type { ReadProblem } from './format';
import { latin1, lineAt, words } from './textOf';

/** One labelled data record of a JCAMP-DX file: `##LABEL= value`, with where its value lies in the bytes. */
export interface LabelledRecord {
  /** Capitals without spaces, hyphens, underscores and slashes, as the standard compares labels. */
  readonly label: string;
  /** First line of the value, comment cut off, trimmed. */
  readonly value: string;
  /** The label's first byte; the value's bytes run from after the `=` up to the next label. */
  readonly at: number;
  readonly from: number;
  readonly to: number;
}

/** One block of a file: from its TITLE to its END. */
export interface Block {
  readonly title: string;
  readonly records: readonly LabelledRecord[];
  /** The END record that closes it, where there is one. */
  readonly end?: LabelledRecord;
}

const HASH = 0x23;
const EQUALS = 0x3d;
/** More labels than any file has; beyond it the file is something else. */
const MAX_RECORDS = 50_000;
const LONGEST_LABEL = 200;
const LONGEST_VALUE = 2000;

const isEnd = (byte: number) => byte === 0x0a || byte === 0x0d;
const isBlank = (byte: number) => byte === 0x20 || byte === 0x09;

/** Labels are compared in capitals, without spaces, hyphens, underscores and slashes (JCAMP-DX 4.24, section 4). */
export const normaliseLabel = (label: string): string => label.toUpperCase().replaceAll(/[\s\-_/]/g, '');

/** Splits a file into its labelled records, in order. A label stands at the beginning of a line. */
export function labelledRecords(
  bytes: Uint8Array
): { readonly records: readonly LabelledRecord[] } | { readonly problem: ReadProblem } {
  const starts: number[] = [];
  for (let at = bytes.indexOf(HASH); at >= 0; at = bytes.indexOf(HASH, at + 1)) {
    if (bytes[at + 1] !== HASH || !beginsLine(bytes, at)) continue;
    starts.push(at++);
    if (starts.length > MAX_RECORDS) {
      const message = `The file has more than ${MAX_RECORDS} labels. Export a single spectrum.`;
      return { problem: { code: 'syntax', message } };
    }
  }
  return { records: starts.map((at, i) => recordAt(bytes, at, starts[i + 1] ?? bytes.length)) };
}

function beginsLine(bytes: Uint8Array, at: number): boolean {
  let i = at - 1;
  while (i >= 0 && isBlank(bytes[i]) && at - i < LONGEST_LABEL) i--;
  return i < 0 || isEnd(bytes[i]);
}

function recordAt(bytes: Uint8Array, at: number, to: number): LabelledRecord {
  let end = at;
  while (end < to && !isEnd(bytes[end]) && end < at + LONGEST_VALUE) end++;
  const line = bytes.subarray(at, end);
  const equals = line.indexOf(EQUALS);
  const labelEnd = equals < 0 ? line.length : equals;
  const label = normaliseLabel(latin1(line, 2, Math.min(labelEnd, LONGEST_LABEL)));
  const from = at + Math.min(labelEnd + 1, line.length);
  return { label, value: withoutComment(words(bytes, from, end)), at, from, to };
}

function withoutComment(text: string): string {
  const comment = text.indexOf('$$');
  return comment < 0 ? text : text.slice(0, comment).trim();
}

/** Blocks of a file in order of their beginning; in a compound file the LINK block comes before those it holds. */
export function blocksOf(records: readonly LabelledRecord[]): Block[] {
  const blocks: { title: string; records: LabelledRecord[]; end?: LabelledRecord }[] = [];
  const open: (typeof blocks)[number][] = [];
  for (const record of records) {
    if (record.label === 'TITLE' || open.length === 0) {
      const block = { title: record.label === 'TITLE' ? record.value : '', records: [] };
      if (record.label === 'END') continue;
      blocks.push(block);
      open.push(block);
    }
    const block = open[open.length - 1];
    if (record.label !== 'END') block.records.push(record);
    else {
      block.end = record;
      open.pop();
    }
  }
  return blocks;
}

/** First record of a label that has a value. */
export const recordOf = (block: Block, label: string): LabelledRecord | undefined =>
  block.records.find((record) => record.label === label && record.value !== '');

/** A refusal that names the record's line. */
export const problemAt = (
  bytes: Uint8Array,
  record: LabelledRecord,
  code: ReadProblem['code'],
  message: string
): { readonly problem: ReadProblem } => ({ problem: { code, message, line: lineAt(bytes, record.at) } });

import { latin1 } from './textOf';

/** One labelled data record of a JCAMP-DX file: `##LABEL= value`, with where its value lies in the bytes. */
export interface LabelledRecord {
  /** Capitals without spaces, hyphens, underscores and slashes, as the standard compares labels. */
  readonly label: string;
  /** First line of the value, comment cut off, trimmed. */
  readonly value: string;
  /** Value's bytes: from after the `=` up to the next label. */
  readonly from: number;
  readonly to: number;
  /** One-based line of the label. */
  readonly line: number;
}

const HASH = 0x23;
const isEnd = (byte: number) => byte === 0x0a || byte === 0x0d;

export const normaliseLabel = (label: string): string => label.toUpperCase().replaceAll(/[\s\-_/]/g, '');

/** Splits a file into its labelled records, in order. */
export function labelledRecords(bytes: Uint8Array): LabelledRecord[] {
  const records: LabelledRecord[] = [];
  let open: { label: string; from: number; line: number } | null = null;
  let line = 1;
  const close = (to: number) => {
    if (open) records.push({ ...open, to, value: firstLine(bytes, open.from, to) });
  };
  for (let i = 0; i < bytes.length;) {
    let start = i;
    while (start < bytes.length && (bytes[start] === 0x20 || bytes[start] === 0x09)) start++;
    let end = start;
    while (end < bytes.length && !isEnd(bytes[end])) end++;
    if (bytes[start] === HASH && bytes[start + 1] === HASH) {
      let equals = start + 2;
      while (equals < end && bytes[equals] !== 0x3d) equals++;
      close(start);
      open = {
        label: normaliseLabel(latin1(bytes, start + 2, Math.min(equals, start + 200))),
        from: Math.min(equals + 1, end),
        line
      };
    }
    i = bytes[end] === 0x0d && bytes[end + 1] === 0x0a ? end + 2 : end + 1;
    line++;
  }
  close(bytes.length);
  return records;
}

function firstLine(bytes: Uint8Array, from: number, to: number): string {
  let end = from;
  while (end < to && !isEnd(bytes[end]) && end < from + 2000) end++;
  const text = latin1(bytes, from, end);
  const comment = text.indexOf('$$');
  return (comment < 0 ? text : text.slice(0, comment)).trim();
}

/** One block of a file: from its TITLE to its END. */
export interface Block {
  readonly title: string;
  readonly records: readonly LabelledRecord[];
  /** Whether the block was closed by ##END=. */
  readonly ended: boolean;
}

/** Blocks of a file in order of their beginning; a LINK block's own records come first. */
export function blocksOf(records: readonly LabelledRecord[]): Block[] {
  const blocks: { title: string; records: LabelledRecord[]; ended: boolean }[] = [];
  const open: number[] = [];
  for (const record of records) {
    if (record.label === '') continue;
    if (record.label === 'TITLE') {
      blocks.push({ title: record.value, records: [], ended: false });
      open.push(blocks.length - 1);
    }
    if (open.length === 0) {
      blocks.push({ title: '', records: [], ended: false });
      open.push(blocks.length - 1);
    }
    const block = blocks[open[open.length - 1]];
    if (record.label === 'END') {
      block.ended = true;
      open.pop();
    } else block.records.push(record);
  }
  return blocks;
}

/** Value of a label in a block, or undefined. */
export const valueOf = (block: Block, label: string): string | undefined =>
  block.records.find((record) => record.label === label)?.value;

/** A label's value as a number, or undefined when absent or no number. */
export function numberOf(block: Block, label: string): number | undefined {
  const text = valueOf(block, label);
  if (text === undefined || text === '') return undefined;
  const value = Number(text.replace(/^([+-]?\d+),(\d+)$/, '$1.$2'));
  return Number.isFinite(value) ? value : undefined;
}

import { DecimalReader } from './decimal';
import type { ReadProblem } from './format';
import { problemAt, type Block, type LabelledRecord } from './jcampLabels';

/** A number of the header, with the place of its last written figure: 100.50 has 0.01, so it is good to half of that. */
export interface StatedNumber {
  readonly value: number;
  readonly place: number;
  readonly record: LabelledRecord;
}

/** What a block states of its data table. */
export interface JcampHeader {
  readonly points?: StatedNumber;
  readonly firstX?: StatedNumber;
  readonly lastX?: StatedNumber;
  readonly deltaX?: StatedNumber;
  readonly firstY?: StatedNumber;
  readonly minY?: StatedNumber;
  readonly maxY?: StatedNumber;
  readonly factorX: number;
  readonly factorY: number;
  readonly xUnits?: { readonly text: string; readonly record: LabelledRecord };
}

/** Plain labels, and the labels whose comma lists state the same per variable in NTUPLES. */
const NUMBERS = {
  points: ['NPOINTS', 'VARDIM', 'x'],
  firstX: ['FIRSTX', 'FIRST', 'x'],
  lastX: ['LASTX', 'LAST', 'x'],
  deltaX: ['DELTAX', '', 'x'],
  firstY: ['FIRSTY', 'FIRST', 'y'],
  minY: ['MINY', 'MIN', 'y'],
  maxY: ['MAXY', 'MAX', 'y'],
  factorX: ['XFACTOR', 'FACTOR', 'x'],
  factorY: ['YFACTOR', 'FACTOR', 'y']
} as const satisfies Record<string, readonly [plain: string, list: string, variable: 'x' | 'y']>;
type Name = keyof typeof NUMBERS;
/** These only confirm what the data say, so that words in them are passed over. */
const CONFIRMING: readonly Name[] = ['firstY', 'minY', 'maxY'];

/**
 * Reads the numbers of a block's header. A label that is no number, or stands there twice with different values, is
 * refused with its line.
 * @param symbols of the data form: `X` and `Y` of `(X++(Y..Y))`; with NTUPLES they say which variables are meant
 */
export function headerOf(
  bytes: Uint8Array,
  block: Block,
  symbols: { readonly x: string; readonly y: string }
): { readonly header: JcampHeader } | { readonly problem: ReadProblem } {
  const table = block.records.some((record) => record.label === 'NTUPLES');
  const order = listOf(block.records.find((record) => record.label === 'SYMBOL')?.value ?? 'X,Y');
  const column = {
    x: Math.max(0, order.indexOf(symbols.x)),
    y: Math.max(0, order.indexOf(symbols.y))
  };
  const found: Partial<Record<Name, StatedNumber>> = {};
  for (const name of Object.keys(NUMBERS) as Name[]) {
    const [plain, list, variable] = NUMBERS[name];
    const stated = statedNumber(bytes, block, table ? list : plain, table ? column[variable] : -1);
    if (stated && 'problem' in stated) {
      if (!CONFIRMING.includes(name)) return stated;
    } else if (stated) found[name] = stated;
  }
  const units = block.records.find(
    (record) => record.label === (table ? 'UNITS' : 'XUNITS') && record.value !== ''
  );
  const text = units && (table ? (listOf(units.value)[column.x] ?? '') : units.value);
  const { factorX, factorY, ...rest } = found;
  const header = {
    ...rest,
    factorX: factorX?.value ?? 1,
    factorY: factorY?.value ?? 1,
    xUnits: units && text ? { text, record: units } : undefined
  };
  return unusable(bytes, header, factorX ?? factorY) ?? { header };
}

const listOf = (value: string): string[] => value.split(',').map((entry) => entry.trim());

/** The one value that every record of a label states, or undefined; `column` picks from a comma list. */
function statedNumber(
  bytes: Uint8Array,
  block: Block,
  label: string,
  column: number
): StatedNumber | { readonly problem: ReadProblem } | undefined {
  let first: StatedNumber | undefined;
  for (const record of block.records) {
    if (record.label !== label) continue;
    const text = column < 0 ? record.value : (listOf(record.value)[column] ?? '');
    if (text === '') continue;
    const letters = new TextEncoder().encode(text);
    const reader = new DecimalReader(letters);
    const value = reader.read(0, letters.length);
    if (reader.end < letters.length || !Number.isFinite(value)) {
      const message = `${label} is "${text.slice(0, 40)}", which is no number. Export the file again.`;
      return problemAt(bytes, record, 'syntax', message);
    }
    if (first && first.value !== value) {
      const message = `${label} is stated twice, as ${first.value} and as ${value}. Export the file again.`;
      return problemAt(bytes, record, 'check-failed', message);
    }
    first ??= { value, place: 10 ** reader.lastPlace, record };
  }
  return first;
}

function unusable(
  bytes: Uint8Array,
  header: JcampHeader,
  factor: StatedNumber | undefined
): { readonly problem: ReadProblem } | null {
  const { points, factorX, factorY } = header;
  if (points && !(Number.isInteger(points.value) && points.value > 0)) {
    const message = `The number of points is given as ${points.value}. Export the file again.`;
    return problemAt(bytes, points.record, 'syntax', message);
  }
  const sound = [factorX, factorY].every((value) => Number.isFinite(value) && value !== 0);
  if (sound || !factor) return null;
  const message = `The factors are ${factorX} for the axis and ${factorY} for the ordinates; neither may be 0. Export the file again.`;
  return problemAt(bytes, factor.record, 'check-failed', message);
}

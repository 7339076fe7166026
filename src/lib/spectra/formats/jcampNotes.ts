import type { ChosenBlock } from './jcampBlocks';
import type { JcampHeader, StatedNumber } from './jcampHeader';
import { recordOf } from './jcampLabels';

/**
 * What is odd about a block and still no reason to refuse it: a missing end, text after the end, another technique's
 * name, FIRSTY, MINY or MAXY that are not those of the data (writers often leave them from an earlier processing).
 * @param y ordinates in the order of the file, factor applied
 */
export function jcampNotes(
  bytes: Uint8Array,
  { block }: ChosenBlock,
  header: JcampHeader,
  y: Float64Array
): string[] {
  const notes: string[] = [];
  if (!block.end) notes.push('The file has no closing ##END=; the number of points is as stated.');
  const type = recordOf(block, 'DATATYPE')?.value;
  if (type !== undefined && !/raman/i.test(type))
    notes.push(
      `The file calls itself "${type.slice(0, 60)}", not a Raman spectrum; see that it is the right file.`
    );
  let lowest = Infinity;
  let highest = -Infinity;
  for (const value of y) {
    if (value < lowest) lowest = value;
    if (value > highest) highest = value;
  }
  const range = highest - lowest;
  const compare = (label: string, stated: StatedNumber | undefined, is: number, what: string) => {
    if (stated && Math.abs(stated.value - is) > stated.place + 1e-3 * range)
      notes.push(`${label} says ${stated.value}, the ${what} ordinate is ${Number(is.toPrecision(8))}.`);
  };
  compare('FIRSTY', header.firstY, y[0], 'first');
  compare('MINY', header.minY, lowest, 'least');
  compare('MAXY', header.maxY, highest, 'largest');
  return notes;
}

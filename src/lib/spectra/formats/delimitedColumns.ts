import type { Layout } from './delimitedLayout';
import { splitCells } from './delimitedLayout';
import type { ReadOptions, ReadProblem } from './format';

export interface ChosenColumns {
  /** Zero-based. */
  readonly axis: number;
  readonly intensity: number;
  readonly unit: 'cm-1' | 'nm';
  readonly notes: readonly string[];
}

const SHIFT_WORDS = /raman|shift|cm-1|cm\^-1|cm\(-1\)|1\/cm|wave ?number/i;
const WAVELENGTH_WORDS = /wavelength|\bnm\b|lambda/i;

/** Chooses axis and intensity columns from the column titles, else the first two; says so in words. */
export function chooseColumns(
  layout: Layout,
  head: string,
  options: ReadOptions
): ChosenColumns | { readonly problem: ReadProblem } {
  const titles = titlesOf(layout, head);
  const axis = options.axisColumn ?? titledAxis(titles) ?? 0;
  const intensity = options.intensityColumn ?? (axis === 0 ? 1 : 0);
  for (const column of [axis, intensity]) {
    if (column >= layout.columnCount) {
      return {
        problem: {
          code: 'no-data',
          message: `The file has ${layout.columnCount} columns; column ${column + 1} does not exist. Choose another column.`
        }
      };
    }
  }
  if (axis === intensity)
    return {
      problem: {
        code: 'no-data',
        message: 'Axis and intensity cannot be the same column. Choose two columns.'
      }
    };
  const unit = options.axisUnit ?? unitOf(titles[axis] ?? '', head);
  const name = (column: number) =>
    titles[column] ? `column ${column + 1} ("${titles[column].slice(0, 60)}")` : `column ${column + 1}`;
  const what = unit === 'nm' ? 'wavelength in nm' : 'Raman shift in cm-1';
  const notes = [`${capital(name(axis))} was taken as ${what}, ${name(intensity)} as intensity.`];
  const others = layout.columnCount - 2;
  if (others > 0) notes.push(`${others} other ${others === 1 ? 'column was' : 'columns were'} not used.`);
  if (
    !options.axisUnit &&
    unit === 'cm-1' &&
    !SHIFT_WORDS.test(titles[axis] ?? '') &&
    !SHIFT_WORDS.test(head)
  ) {
    notes.push('The file does not state the unit of its axis; cm-1 was assumed.');
  }
  return { axis, intensity, unit, notes };
}

const capital = (text: string) => text.replace(/^./, (first) => first.toUpperCase());

/** Titles in the last header line, when it has as many cells as there are columns. */
function titlesOf(layout: Layout, head: string): string[] {
  const last = head
    .split(/\r\n|\r|\n/)
    .filter((line) => line.trim() !== '')
    .pop();
  if (last === undefined) return [];
  const bare = last.replace(/^\s{0,100}(#|%|;|\/\/)/, '');
  const cells = splitCells(bare, String.fromCharCode(layout.delimiter));
  return cells.length === layout.columnCount ? cells : [];
}

function titledAxis(titles: readonly string[]): number | undefined {
  const shift = titles.findIndex((title) => SHIFT_WORDS.test(title));
  if (shift >= 0) return shift;
  const wavelength = titles.findIndex((title) => WAVELENGTH_WORDS.test(title));
  return wavelength >= 0 ? wavelength : undefined;
}

function unitOf(title: string, head: string): 'cm-1' | 'nm' {
  if (SHIFT_WORDS.test(title)) return 'cm-1';
  if (WAVELENGTH_WORDS.test(title)) return 'nm';
  return /(^|\n)[#%; ]{0,10}(x ?units?|axis ?unit)s?\s{0,10}[:=]\s{0,10}(nm|nanomet)/i.test(head)
    ? 'nm'
    : 'cm-1';
}

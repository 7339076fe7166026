import type { AxisUnit } from '../axis/units';
import { axisUnitOf, isForeignAxis } from './axisUnit';
import type { DelimitedHead } from './delimitedHead';
import type { Layout } from './delimitedLayout';
import type { ReadOptions, ReadProblem } from './format';

export interface ChosenColumns {
  /** Zero-based. */
  readonly axis: number;
  readonly intensity: number;
  readonly unit: AxisUnit;
  /** False when neither the file nor the user named the unit. */
  readonly unitStated: boolean;
  readonly notes: readonly string[];
}

type Refused = { readonly problem: ReadProblem };

/**
 * Chooses axis and intensity among the columns of numbers. The axis is the column whose title says Raman shift or
 * wavenumber, else wavelength, else the first one; the intensity the first column after it whose title says intensity,
 * counts or signal, else the next column. What was chosen is told; the user may overrule each choice.
 */
export function chooseColumns(
  layout: Layout,
  head: DelimitedHead,
  options: ReadOptions
): ChosenColumns | Refused {
  const { titles } = head;
  const numeric = layout.numeric.flatMap((is, column) => (is ? [column] : []));
  const axis = options.axisColumn ?? axisAmong(numeric, titles);
  const intensity = options.intensityColumn ?? intensityAmong(numeric, titles, axis);
  const missing = [axis, intensity].find((column) => column >= layout.columnCount);
  if (missing !== undefined)
    return noData(
      `The file has ${layout.columnCount} columns; column ${missing + 1} does not exist. Choose another column.`
    );
  if (axis === intensity) return noData('Axis and intensity cannot be the same column. Choose two columns.');
  const title = titles[axis] ?? '';
  const found = options.axisUnit ?? axisUnitOf(title) ?? head.axisUnit;
  if (!found && isForeignAxis(title)) {
    const message = `Column ${axis + 1} is called "${title.slice(0, 60)}", which is no Raman shift and no wavelength. Choose the column of the axis, or export the spectrum with its axis in cm-1.`;
    return { problem: { code: 'unit-unknown', message } };
  }
  const unit = found ?? 'cm-1';
  const notes = [
    `${nameOf(axis, titles, 'Column')} was taken as ${WHAT[unit]}, ${nameOf(intensity, titles, 'column')} as intensity.`
  ];
  const others = layout.columnCount - 2;
  if (others > 0) notes.push(`${others} other ${others === 1 ? 'column was' : 'columns were'} not used.`);
  return { axis, intensity, unit, unitStated: found !== null, notes };
}

const WHAT: Readonly<Record<AxisUnit, string>> = {
  'cm-1': 'Raman shift in cm-1',
  nm: 'wavelength in nm',
  um: 'wavelength in micrometers'
};

const noData = (message: string): Refused => ({ problem: { code: 'no-data', message } });

const nameOf = (column: number, titles: readonly string[], word: string): string =>
  titles[column] ? `${word} ${column + 1} ("${titles[column].slice(0, 60)}")` : `${word} ${column + 1}`;

/** Titles of counts that number the points and measure nothing. */
const isCounter = (title: string): boolean =>
  /^(pixel|index|point|number|no\.?|#|n|i)s?$/i.test(title.trim());

function axisAmong(numeric: readonly number[], titles: readonly string[]): number {
  const units = numeric.map((column) => axisUnitOf(titles[column] ?? ''));
  for (const unit of ['cm-1', 'nm', 'um'] as const) {
    const found = units.indexOf(unit);
    if (found >= 0) return numeric[found];
  }
  return (
    (numeric.length > 2 ? numeric.find((column) => !isCounter(titles[column] ?? '')) : undefined) ??
    numeric[0]
  );
}

function intensityAmong(numeric: readonly number[], titles: readonly string[], axis: number): number {
  const able = numeric.filter(
    (column) =>
      column !== axis && axisUnitOf(titles[column] ?? '') === null && !isCounter(titles[column] ?? '')
  );
  const called = able.find((column) => /intens|counts|signal/i.test(titles[column] ?? ''));
  return (
    called ??
    able.find((column) => column > axis) ??
    able[0] ??
    numeric.find((column) => column !== axis) ??
    axis
  );
}

import { thousandsProblem } from './decimalComma';
import { chooseColumns, type ChosenColumns } from './delimitedColumns';
import { headOf, type DelimitedHead } from './delimitedHead';
import { layoutOf, type Layout } from './delimitedLayout';
import { lineOfRow, readRows, type Rows } from './delimitedRows';
import { excitationOf, finishAxis } from './finishAxis';
import type { ReadOptions, ReadOutcome, ReadProblem, SpectrumFormat } from './format';
import { MIN_POINTS } from '../spectrum';
import { firstTurn, turnProblem } from './oneWay';
import { wavelengthNote } from './wavelengthNote';

/**
 * Delimited text: the specification of what is read.
 *
 * - One point a line; columns split by tab, semicolon, vertical bar, comma or spaces; decimal point or decimal comma;
 *   cells may stand in double quotes. Thousands are not split. How these are found: delimitedLayout.ts.
 * - Before the numbers any lines of comment (`#`, `%`, `;`, `//`), of the measurement (`Laser wavelength: 785 nm`,
 *   `Integration time (ms);2000`, `Accumulations = 3`, `Serial number`; statedFields.ts) and titles of columns.
 * - The columns are chosen by their titles, else the first two (delimitedColumns.ts). The unit of the axis is that of
 *   its title, else of an `X units` line, else cm-1 with a note. nm and micrometers need the excitation wavelength.
 * - From the first row of numbers on every line is a row, with the columns of the first one and numbers in both that
 *   are read. Any other line, an axis that turns back or repeats a value, a count that a `Number of points` line
 *   contradicts: the whole file is refused, with the line. Only lines of words at the very end are passed over, and
 *   told. An axis from high to low is turned round, and told.
 *
 * Example:
 *
 *     # Laser wavelength: 785 nm
 *     Raman shift (cm-1);Intensity
 *     200,0;1534,2
 *     201,0;1533,9
 *
 * reads as split by semicolon with decimal comma; column 1 is the Raman shift 200, 201, column 2 the intensity 1534.2,
 * 1533.9 (with 14 more rows: a spectrum has at least 16 points).
 */
export const delimitedText: SpectrumFormat = {
  name: 'delimited-text',
  sniff: (head) => {
    const first = head.find((byte) => byte > 0x20) ?? 0;
    return !'<{['.includes(String.fromCharCode(first));
  },
  read: (bytes, options) => {
    const layout = layoutOf(bytes, options);
    if ('problem' in layout) return { ok: false, problem: layout.problem };
    const head = headOf(bytes, layout);
    const columns = chooseColumns(layout, head, options);
    if ('problem' in columns) return { ok: false, problem: columns.problem };
    const rows = readRows(bytes, layout, columns.axis, columns.intensity);
    if ('problem' in rows) return { ok: false, problem: rows.problem };
    const fault = rowsFault(bytes, layout, head, rows) ?? thousandsProblem(bytes, layout, options);
    return fault ? { ok: false, problem: fault } : spectrumOf(rows, layout, head, columns, options);
  }
};

function rowsFault(bytes: Uint8Array, layout: Layout, head: DelimitedHead, { x }: Rows): ReadProblem | null {
  if (head.points !== undefined && head.points !== x.length) {
    const message = `The file says ${head.points} points but holds ${x.length}. It is cut short or damaged; export it again.`;
    return { code: 'count-mismatch', message };
  }
  if (x.length < 4 && layout.numeric.filter(Boolean).length >= MIN_POINTS) {
    const message = `The file has ${x.length} rows of ${layout.columnCount} numbers: the spectrum seems to lie in rows. Export it in columns.`;
    return { code: 'no-data', message };
  }
  const turn = firstTurn(x);
  return turn < 0 ? null : turnProblem(x, turn, lineOfRow(bytes, layout, turn));
}

function spectrumOf(
  rows: Rows,
  layout: Layout,
  head: DelimitedHead,
  columns: ChosenColumns,
  options: ReadOptions
): ReadOutcome {
  const notes = [...layout.notes, ...columns.notes];
  const excitation = excitationOf({ stated: head.acquisition.excitationNm, given: options.excitationNm });
  if ('problem' in excitation) return { ok: false, problem: excitation.problem };
  if (!columns.unitStated) notes.push(...wavelengthNote(rows.x, excitation.nm));
  const finished = finishAxis(rows.x, rows.y, columns.unit, excitation.nm, notes);
  if ('problem' in finished) return { ok: false, problem: finished.problem };
  const { footerLines } = rows;
  if (footerLines > 0)
    notes.push(
      `${footerLines} ${footerLines === 1 ? 'line of words after the numbers was' : 'lines of words after the numbers were'} not read.`
    );
  const acquisition =
    excitation.nm === undefined ? head.acquisition : { ...head.acquisition, excitationNm: excitation.nm };
  return { ok: true, format: 'delimited-text', spectrum: finished.spectrum, acquisition, notes };
}

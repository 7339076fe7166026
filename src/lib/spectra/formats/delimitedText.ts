import { latin1 } from './textOf';
import { chooseColumns } from './delimitedColumns';
import { layoutOf, type Layout } from './delimitedLayout';
import { acquisitionOf } from './delimitedMetadata';
import { readRows } from './delimitedRows';
import type { ReadOptions, ReadOutcome, ReadProblem, SpectrumFormat } from './format';
import { finishAxis } from './finishAxis';

/**
 * Delimited text: one point a line, columns split by comma, semicolon, tab, pipe or spaces; decimal point or
 * decimal comma; before the numbers any lines of comment (`#`, `%`, `;`, `//`), metadata (`name: value`,
 * `name=value`) and column titles. What was taken for what is told in the notes and can be overridden.
 *
 * Example:
 *
 *     # Laser wavelength: 785 nm
 *     Raman shift (cm-1);Intensity
 *     200,0;1534,2
 *     201,0;1533,9
 *
 * reads as semicolon-delimited with decimal comma; column 1 is the Raman shift, column 2 the intensity. Once the
 * numbers have begun, a line that is not numbers is an error with its line number: nothing is skipped silently.
 */
export const delimitedText: SpectrumFormat = {
  name: 'delimited-text',
  sniff: () => true,
  read: (bytes, options) => {
    const layout = layoutOf(bytes, options);
    if ('problem' in layout) return { ok: false, problem: layout.problem };
    return readLaidOut(bytes, layout, options);
  }
};

function readLaidOut(bytes: Uint8Array, layout: Layout, options: ReadOptions): ReadOutcome {
  const head = latin1(bytes, 0, layout.dataStart);
  const columns = chooseColumns(layout, head, options);
  if ('problem' in columns) return { ok: false, problem: columns.problem };
  const rows = readRows(bytes, layout, columns.axis, columns.intensity);
  if ('problem' in rows) return { ok: false, problem: rows.problem };
  const acquisition = acquisitionOf(head, options.excitationNm);
  const notes = [...layout.notes, ...columns.notes];
  const finished = finishAxis(
    rows.x,
    rows.y,
    columns.unit,
    options.excitationNm ?? acquisition.excitationNm,
    notes
  );
  if ('problem' in finished) return { ok: false, problem: finished.problem };
  const repeated = duplicateProblem(rows.x, rows.lines);
  if (repeated) return { ok: false, problem: repeated };
  return { ok: true, format: 'delimited-text', spectrum: finished.spectrum, acquisition, notes };
}

/** The axis must go one way; the line where it stops doing so is named. */
function duplicateProblem(x: Float64Array, lines: Uint32Array): ReadProblem | null {
  const down = x.length > 1 && x[x.length - 1] < x[0];
  for (let i = 1; i < x.length; i++) {
    if (x[i] === x[i - 1])
      return {
        code: 'spectrum-fault',
        line: lines[i],
        message: `The axis value ${x[i]} stands there twice. Export the spectrum again.`
      };
    if (x[i] < x[i - 1] !== down)
      return {
        code: 'spectrum-fault',
        line: lines[i],
        message: `The axis turns back at ${x[i]}. Export a single spectrum.`
      };
  }
  return null;
}

import type { AxisUnit } from '../axis/units';
import { axisUnitOf } from './axisUnit';
import { excitationOf, finishAxis } from './finishAxis';
import type { ReadOptions, ReadOutcome, ReadProblem, SpectrumFormat } from './format';
import { chooseBlock, type ChosenBlock } from './jcampBlocks';
import { headerOf, type JcampHeader } from './jcampHeader';
import { blocksOf, labelledRecords, problemAt } from './jcampLabels';
import { pointsOf, type DataForm } from './jcampPoints';
import { jcampNotes } from './jcampNotes';
import { StatedFields } from './statedFields';

/**
 * JCAMP-DX 4.24 (McDonald & Wilks, Appl. Spectrosc. 42:151, 1988) and 5.01 (Lampen et al., Pure Appl. Chem. 71:1549,
 * 1999): the specification of what is read.
 *
 * - A file is labelled records `##LABEL= value`, each at the beginning of a line; labels are compared in capitals
 *   without spaces, hyphens, underscores and slashes. `$$` begins a comment. Lines end in CR, LF or both.
 * - A block runs from ##TITLE to ##END. Of several blocks with a spectrum one must be chosen (`block`). A missing
 *   ##END is a note while NPOINTS proves the table whole, else a refusal.
 * - Data: `##XYDATA= (X++(Y..Y))` in AFFN, PAC, SQZ, DIF, DUP and any mixture, with check values (jcampAsdf.ts);
 *   `##XYDATA=` or `##XYPOINTS= (XY..XY)` as pairs; of `##NTUPLES=` the first `##DATA TABLE=` in either form. A table
 *   of peaks is no spectrum. A `?` for a missing ordinate is a refusal.
 * - Ordinates are multiplied by YFACTOR, abscissae by XFACTOR. The even axis runs from FIRSTX to LASTX over NPOINTS
 *   (else by DELTAX, else by the lines' abscissae). NPOINTS, DELTAX and the abscissa of every line must agree with it
 *   (jcampAxis.ts); of pairs, FIRSTX and LASTX with the ends. FIRSTY, MINY, MAXY that disagree are notes.
 * - XUNITS: 1/CM or other words for it, taken as Raman shift, also where the label is missing (with a note);
 *   NANOMETERS or MICROMETERS with the excitation wavelength from the file (##RAMAN EXCITATION, ##EXCITATION
 *   WAVELENGTH, ##LASER WAVELENGTH, also as ##$ or ##. labels) or from the user. Anything else is refused.
 *
 * Example:
 *
 *     ##TITLE= worked example
 *     ##JCAMP-DX= 4.24 $$ a comment
 *     ##DATA TYPE= RAMAN SPECTRUM
 *     ##XUNITS= 1/CM
 *     ##FIRSTX= 400
 *     ##LASTX= 430
 *     ##NPOINTS= 16
 *     ##YFACTOR= 0.5
 *     ##XYDATA= (X++(Y..Y))
 *     400A0J2%TK1k
 *     410D1j1X
 *     422b5+3+4.5E1A
 *     ##END=
 *
 * reads as shifts 400, 402 ... 430. The first line is 10, 22, 22, 22 (`T`: the zero difference twice in all), 43, 41;
 * it ends in DIF form, so the second begins with the check value 41, then 30, 19, 8, -3, -14, -25 (-11 six times in
 * all); the third confirms -25 and adds 3, 4.5, 51 (`E1`), 1. Times 0.5 the intensities are 5, 11, 11, 11, 21.5, 20.5,
 * 15, 9.5, 4, -1.5, -7, -12.5, 1.5, 2.25, 25.5, 0.5.
 */
export const jcampDx: SpectrumFormat = {
  name: 'jcamp-dx',
  sniff: (head) => {
    const found = labelledRecords(head);
    if ('problem' in found) return true;
    return found.records.some(
      ({ label, at }) => TELLING.has(label) || (label === 'TITLE' && head[at + 2] !== 0x20)
    );
  },
  read: (bytes, options) => {
    const found = labelledRecords(bytes);
    if ('problem' in found) return { ok: false, problem: found.problem };
    const chosen = chooseBlock(bytes, blocksOf(found.records), options);
    if ('problem' in chosen) return { ok: false, problem: chosen.problem };
    const form = dataForm(bytes, chosen);
    return 'problem' in form ? { ok: false, problem: form.problem } : readBlock(bytes, chosen, form, options);
  }
};

/** Labels that no other kind of file has at the beginning of a line behind `##`. */
const TELLING = new Set(
  'JCAMPDX DATATYPE DATACLASS XUNITS YUNITS FIRSTX LASTX DELTAX NPOINTS XFACTOR YFACTOR XYDATA XYPOINTS NTUPLES'.split(
    ' '
  )
);

/** The form of a data table: `(X++(Y..Y))` or `(XY..XY)`, with its symbols; the last bracket is often forgotten. */
function dataForm(bytes: Uint8Array, { data }: ChosenBlock): DataForm | { readonly problem: ReadProblem } {
  const text = data.value.slice(0, 100).replaceAll(/\s/g, '').toUpperCase();
  const table = /^\(([A-Z])\+\+\(([A-Z])\.\.\2\)/.exec(text);
  if (table) return { even: true, x: table[1], y: table[2] };
  const pairs = /^\(([A-Z])([A-Z])\.\.\1\2\)/.exec(text);
  if (pairs) return { even: false, x: pairs[1], y: pairs[2] };
  const message = `The data are in the form "${data.value.slice(0, 40)}", which is not read. Export the spectrum as (X++(Y..Y)) or (XY..XY).`;
  return problemAt(bytes, data, 'syntax', message);
}

function readBlock(
  bytes: Uint8Array,
  chosen: ChosenBlock,
  form: DataForm,
  options: ReadOptions
): ReadOutcome {
  const refused = ({ problem }: { problem: ReadProblem }): ReadOutcome => ({ ok: false, problem });
  const { block, notes } = chosen;
  const found = headerOf(bytes, block, form);
  if ('problem' in found) return refused(found);
  const unit = unitOf(bytes, found.header, options, notes);
  if ('problem' in unit) return refused(unit);
  const points = pointsOf(bytes, chosen, form, found.header);
  if ('problem' in points) return refused(points);
  const fields = new StatedFields({
    resolutionCm1: unit.unit === 'cm-1' ? 'cm-1' : undefined,
    excitationNm: 'nm'
  });
  for (const { label, value } of block.records) fields.add(label.replace(/^[$.]/, ''), value);
  const acquisition = fields.acquisition();
  const excitation = excitationOf({ stated: acquisition.excitationNm, given: options.excitationNm });
  if ('problem' in excitation) return refused(excitation);
  const finished = finishAxis(points.x, points.y, unit.unit, excitation.nm, notes);
  if ('problem' in finished) return refused(finished);
  notes.push(...jcampNotes(bytes, chosen, found.header, points.y));
  const used = excitation.nm === undefined ? acquisition : { ...acquisition, excitationNm: excitation.nm };
  return { ok: true, format: 'jcamp-dx', spectrum: finished.spectrum, acquisition: used, notes };
}

function unitOf(
  bytes: Uint8Array,
  { xUnits }: JcampHeader,
  options: ReadOptions,
  notes: string[]
): { readonly unit: AxisUnit } | { readonly problem: ReadProblem } {
  if (options.axisUnit) return { unit: options.axisUnit };
  if (!xUnits) {
    notes.push('The file does not state the unit of its axis; Raman shift in cm-1 was assumed.');
    return { unit: 'cm-1' };
  }
  const unit = axisUnitOf(xUnits.text);
  if (unit) return { unit };
  const message = `The axis is in "${xUnits.text.slice(0, 40)}", which is no Raman shift. Export the spectrum with its axis in cm-1 or nm.`;
  return problemAt(bytes, xUnits.record, 'unit-unknown', message);
}

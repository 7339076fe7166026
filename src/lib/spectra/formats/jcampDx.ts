import { acquisitionOfBlock } from './jcampAcquisition';
import { blocksOf, labelledRecords, numberOf, valueOf, type Block, type LabelledRecord } from './jcampLabels';
import { readPairs, readTable } from './jcampData';
import type { ReadOptions, ReadOutcome, ReadProblem, SpectrumFormat } from './format';
import { finishAxis } from './finishAxis';
import { latin1 } from './textOf';

/**
 * JCAMP-DX 4.24 (McDonald & Wilks, Appl. Spectrosc. 42:151, 1988) and 5.01 (Lampen et al., Pure Appl. Chem.
 * 71:1549, 1999): labelled records, one or several blocks, data as `##XYDATA= (X++(Y..Y))` in any ASDF form
 * (jcampAsdf.ts), `##XYPOINTS=`/`##PEAKTABLE=` pairs, or the first page of `##NTUPLES=`.
 *
 * Ordinates are multiplied by YFACTOR. Abscissae run in equal steps from FIRSTX to LASTX over NPOINTS; the
 * abscissa at each line's start, times XFACTOR, must lie where that says, and the number of points must agree.
 *
 * Example:
 *
 *     ##TITLE= example
 *     ##JCAMP-DX= 4.24
 *     ##XUNITS= 1/CM
 *     ##FIRSTX= 400
 *     ##LASTX= 403
 *     ##NPOINTS= 4
 *     ##XFACTOR= 1
 *     ##YFACTOR= 0.5
 *     ##XYDATA= (X++(Y..Y))
 *     400A0J2
 *     402B4%
 *     ##END=
 *
 * reads as shifts 400, 401, 402, 403 with intensities 5, 11 (10 + 12 = 22), 12 and 12; the SQZ value 24 repeats
 * no ordinate here because the first line's last form is DIF: its check value must be 22, so this file is refused
 * on line 10, and a sound one has `402B2...` there.
 */
export const jcampDx: SpectrumFormat = {
  name: 'jcamp-dx',
  sniff: (head) => /^\s{0,200}(\$\$[^\n]{0,500}\n\s{0,50}){0,20}##\s{0,10}[A-Za-z.$]/.test(latin1(head)),
  read: (bytes, options) => {
    const blocks = blocksOf(labelledRecords(bytes));
    const chosen = chooseBlock(blocks, options);
    return 'problem' in chosen
      ? { ok: false, problem: chosen.problem }
      : readBlock(bytes, chosen.block, chosen.notes, options);
  }
};

const DATA_LABELS = ['XYDATA', 'XYPOINTS', 'PEAKTABLE', 'DATATABLE'];
const dataRecord = (block: Block): LabelledRecord | undefined =>
  block.records.find((record) => DATA_LABELS.includes(record.label));

function chooseBlock(
  blocks: readonly Block[],
  options: ReadOptions
): { block: Block; notes: string[] } | { problem: ReadProblem } {
  const withData = blocks.filter((block) => dataRecord(block) !== undefined);
  if (withData.length === 0)
    return {
      problem: {
        code: 'no-data',
        message: 'The file holds no spectrum (no XYDATA, XYPOINTS or NTUPLES). Export the spectrum itself.'
      }
    };
  if (options.block !== undefined) {
    const block = withData[options.block];
    if (!block)
      return {
        problem: {
          code: 'choice-needed',
          message: `The file has ${withData.length} spectra; choose one of them.`,
          choices: titles(withData)
        }
      };
    return {
      block,
      notes: [`Spectrum ${options.block + 1} of ${withData.length} in the file was taken, as chosen.`]
    };
  }
  if (withData.length > 1) {
    return {
      problem: {
        code: 'choice-needed',
        message: `The file holds ${withData.length} spectra. Choose which one to read.`,
        choices: titles(withData)
      }
    };
  }
  return {
    block: withData[0],
    notes: withData[0].ended ? [] : ['The file has no closing ##END=; nothing after the data was missed.']
  };
}

const titles = (blocks: readonly Block[]) => blocks.map((block, i) => block.title || `Spectrum ${i + 1}`);

function readBlock(bytes: Uint8Array, block: Block, notes: string[], options: ReadOptions): ReadOutcome {
  const record = dataRecord(block) as LabelledRecord;
  const unit = options.axisUnit ?? unitOf(block);
  if (typeof unit === 'object') return { ok: false, problem: unit };
  const data = /\+\+/.test(record.value)
    ? readTable(bytes, block, record, notes)
    : readPairs(bytes, block, record);
  if ('problem' in data) return { ok: false, problem: data.problem };
  const acquisition = acquisitionOfBlock(block, options.excitationNm);
  const finished = finishAxis(data.x, data.y, unit, options.excitationNm ?? acquisition.excitationNm, notes);
  if ('problem' in finished) return { ok: false, problem: finished.problem };
  noteExtremes(block, data.y, notes);
  return { ok: true, format: 'jcamp-dx', spectrum: finished.spectrum, acquisition, notes };
}

function unitOf(block: Block): 'cm-1' | 'nm' | ReadProblem {
  const text = (valueOf(block, 'XUNITS') ?? valueOf(block, 'UNITS')?.split(',')[0] ?? '')
    .trim()
    .toUpperCase();
  if (text === '' || /1\/CM|CM-1|CM\^-1|RAMAN|WAVENUMBER|ARBITRARY/.test(text)) return 'cm-1';
  if (/NANOMET|^NM$/.test(text)) return 'nm';
  const line = block.records.find((record) => record.label === 'XUNITS')?.line;
  return {
    code: 'unit-unknown',
    line,
    message: `The axis is in "${text.slice(0, 40)}", which is no Raman shift. Export the spectrum with its axis in cm-1 or nm.`
  };
}

/** MAXY and MINY often disagree with the data in files of the field: told, not refused. */
function noteExtremes(block: Block, y: Float64Array, notes: string[]): void {
  const stated = numberOf(block, 'MAXY');
  if (stated === undefined) return;
  let highest = -Infinity;
  for (const value of y) highest = Math.max(highest, value);
  if (Math.abs(stated - highest) > 1e-3 * Math.max(1e-12, Math.abs(highest)))
    notes.push(`MAXY says ${stated}, the largest ordinate is ${highest}.`);
}

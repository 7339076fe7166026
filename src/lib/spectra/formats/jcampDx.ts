import { acquisitionOfBlock } from './jcampAcquisition';
import { decodeAsdf } from './jcampAsdf';
import { blocksOf, labelledRecords, numberOf, valueOf, type Block, type LabelledRecord } from './jcampLabels';
import { decodePairs } from './jcampPairs';
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

interface Points {
  readonly x: Float64Array;
  readonly y: Float64Array;
}

/** Data bytes begin on the line after the label. */
function bodyOf(bytes: Uint8Array, record: LabelledRecord): { from: number; line: number } {
  let from = record.from;
  while (from < record.to && bytes[from] !== 0x0a && bytes[from] !== 0x0d) from++;
  return { from, line: record.line };
}

function readTable(
  bytes: Uint8Array,
  block: Block,
  record: LabelledRecord,
  notes: string[]
): Points | { problem: ReadProblem } {
  const body = bodyOf(bytes, record);
  const stated = numberOf(block, 'NPOINTS') ?? listed(block, 'VARDIM');
  const table = decodeAsdf(bytes, body.from, record.to, body.line, stated ?? 0);
  if ('problem' in table) return table;
  const n = table.y.length;
  if (n === 0)
    return {
      problem: {
        code: 'no-data',
        line: record.line,
        message: 'The data table is empty. Export the spectrum again.'
      }
    };
  if (stated !== undefined && stated !== n) {
    return {
      problem: {
        code: 'count-mismatch',
        line: record.line,
        message: `The file says ${stated} points but holds ${n}. It is cut short or damaged; export it again.`
      }
    };
  }
  const factorX = numberOf(block, 'XFACTOR') ?? listed(block, 'FACTOR') ?? 1;
  const factorY = numberOf(block, 'YFACTOR') ?? listed(block, 'FACTOR', 1) ?? 1;
  const axis = axisOf(block, n, factorX, table.starts);
  if ('problem' in axis) return axis;
  if (stated === undefined)
    notes.push('The file does not state the number of points, so it could not be checked.');
  const y = table.y;
  if (factorY !== 1) for (let i = 0; i < n; i++) y[i] *= factorY;
  return { x: axis.x, y };
}

/** n-th entry of a comma list such as NTUPLES' VAR_DIM, as a number. */
function listed(block: Block, label: string, index = 0): number | undefined {
  const entry = valueOf(block, label)?.split(',')[index]?.trim();
  if (entry === undefined || entry === '') return undefined;
  const value = Number(entry);
  return Number.isFinite(value) ? value : undefined;
}

function axisOf(
  block: Block,
  n: number,
  factorX: number,
  starts: readonly { x: number; index: number; line: number }[]
): { x: Float64Array } | { problem: ReadProblem } {
  const first = numberOf(block, 'FIRSTX') ?? listed(block, 'FIRST') ?? starts[0].x * factorX;
  const delta = numberOf(block, 'DELTAX');
  const last =
    numberOf(block, 'LASTX') ??
    listed(block, 'LAST') ??
    (delta === undefined ? undefined : first + delta * (n - 1));
  const end = last ?? lastFromStarts(n, first, factorX, starts);
  if (end === undefined)
    return {
      problem: {
        code: 'no-data',
        message: 'The file states neither LASTX nor DELTAX, so its axis is unknown. Export it again.'
      }
    };
  const step = n > 1 ? (end - first) / (n - 1) : 0;
  if (n > 1 && step === 0)
    return {
      problem: {
        code: 'check-failed',
        message: 'FIRSTX and LASTX are equal, so the axis has no extent. Export the file again.'
      }
    };
  if (delta !== undefined && n > 1 && Math.abs(Math.abs(delta) - Math.abs(step)) > 0.02 * Math.abs(step)) {
    return {
      problem: {
        code: 'check-failed',
        message: `DELTAX is ${delta} but the axis steps by ${step}. The file contradicts itself; export it again.`
      }
    };
  }
  for (const start of starts) {
    const should = first + step * start.index;
    // Line abscissae are often rounded: half a unit of their last figure or one step is allowed.
    if (Math.abs(start.x * factorX - should) > Math.abs(step) * 1.01 + Math.abs(factorX) * 0.51) {
      return {
        problem: {
          code: 'check-failed',
          line: start.line,
          message: `The line begins at ${start.x * factorX}, but the axis should be at ${should.toPrecision(8)}: points are missing or doubled. Export the file again.`
        }
      };
    }
  }
  const x = new Float64Array(n);
  for (let i = 0; i < n; i++) x[i] = first + step * i;
  return { x };
}

function lastFromStarts(
  n: number,
  first: number,
  factorX: number,
  starts: readonly { x: number; index: number }[]
): number | undefined {
  const far = starts[starts.length - 1];
  if (far.index === 0) return undefined;
  return first + ((far.x * factorX - first) / far.index) * (n - 1);
}

function readPairs(
  bytes: Uint8Array,
  block: Block,
  record: LabelledRecord
): Points | { problem: ReadProblem } {
  const body = bodyOf(bytes, record);
  const pairs = decodePairs(bytes, body.from, record.to, body.line);
  if ('problem' in pairs) return pairs;
  const stated = numberOf(block, 'NPOINTS');
  if (stated !== undefined && stated !== pairs.x.length) {
    return {
      problem: {
        code: 'count-mismatch',
        line: record.line,
        message: `The file says ${stated} points but holds ${pairs.x.length}. It is cut short or damaged; export it again.`
      }
    };
  }
  const factorX = numberOf(block, 'XFACTOR') ?? 1;
  const factorY = numberOf(block, 'YFACTOR') ?? 1;
  return { x: pairs.x.map((value) => value * factorX), y: pairs.y.map((value) => value * factorY) };
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

import { isExcitationNm } from '../axis/units';
import type { Acquisition } from '../spectrum';

type Field = keyof Acquisition | 'date' | 'time' | 'points';
type Unit = 'nm' | 'mw' | 'ms' | 's' | 'cm-1';

const LABELS: Readonly<Record<Field, string>> = {
  excitationNm:
    'laser laserwavelength laserline excitation excitationwavelength excitationlaser ramanexcitation ' +
    'ramanexcitationwavelength ramanlaserwavelength',
  laserPowerMw: 'power laserpower laserpoweratsample excitationpower',
  integrationTimeMs: 'integrationtime integration exposuretime exposure acquisitiontime',
  accumulations:
    'accumulations numberofaccumulations averages numberofaverages scans numberofscans coadds coadditions',
  resolutionCm1: 'resolution spectralresolution',
  instrumentSerial:
    'serial serialnumber serialno instrumentserial instrumentserialnumber spectrometerserialnumber ' +
    'deviceserial deviceserialnumber',
  title: 'title sample samplename name sampleid',
  statedTime: 'longdate dateandtime datetime timestamp acquired measured measuredat',
  date: 'date acquisitiondate measurementdate',
  time: 'time timeofday',
  points: 'points numberofpoints datapoints numberofdatapoints npoints'
};

/** The field that a label states, by the label's letters in lower case. */
const FIELD_OF = new Map(
  (Object.keys(LABELS) as Field[]).flatMap((field) => LABELS[field].split(' ').map((label) => [label, field]))
);

/** What a number in each unit is multiplied by; a number in another unit, or in none, is passed over. */
const SCALES: Readonly<Partial<Record<Field, Partial<Record<Unit, number>>>>> = {
  excitationNm: { nm: 1 },
  laserPowerMw: { mw: 1 },
  integrationTimeMs: { ms: 1, s: 1000 },
  resolutionCm1: { 'cm-1': 1 }
};

const UNIT_OF = new Map<string, Unit>([
  ['nm', 'nm'],
  ['mw', 'mw'],
  ['ms', 'ms'],
  ['s', 's'],
  ['sec', 's'],
  ['seconds', 's'],
  ['cm-1', 'cm-1'],
  ['cm^-1', 'cm-1'],
  ['1/cm', 'cm-1']
]);

const lettersOf = (text: string): string => text.replaceAll(/[^a-z]/g, '');

/** A label as its field and the unit it carries: `Integration time (ms)`, `integration_time_ms`. */
function splitLabel(label: string): { readonly field?: Field; readonly unit?: Unit } {
  const lower = label.toLowerCase().slice(0, 100);
  const open = lower.search(/[([]/);
  const bare = open < 0 ? lower : lower.slice(0, open);
  const bracketed = open < 0 ? '' : lower.slice(open + 1).replaceAll(/[)\]\s]/g, '');
  const field = FIELD_OF.get(lettersOf(bare));
  if (field) return { field, unit: UNIT_OF.get(bracketed) };
  const ending = /[\s_](nm|ms|mw|s)$/.exec(bare)?.[1] ?? '';
  return {
    field: FIELD_OF.get(lettersOf(bare.slice(0, bare.length - ending.length))),
    unit: UNIT_OF.get(ending)
  };
}

/** A number at the start of a value and the unit after it: `785.0 nm`, `2,5 s`. */
function splitValue(value: string): { readonly number: number; readonly unit?: Unit } {
  const found = /^([+-]?\d{1,15})(?:[.,](\d{1,15}))?\s{0,5}([a-z^/0-9-]{0,8})/i.exec(value);
  if (!found) return { number: NaN };
  return { number: Number(`${found[1]}.${found[2] ?? '0'}`), unit: UNIT_OF.get(found[3].toLowerCase()) };
}

type Found = { -readonly [Key in keyof Acquisition]: Acquisition[Key] };

/** What a file's labels state of the measurement, gathered one by one; the first statement of a field counts. */
export class StatedFields {
  private readonly found: Found = {};
  private date?: string;
  private time?: string;
  /** Number of points, where the file states it. */
  points?: number;

  /** @param assumed unit of a field that goes without saying in this format */
  constructor(private readonly assumed: Readonly<Partial<Record<Field, Unit>>>) {}

  /** Takes in one `label: value`. A label that means nothing here, or a number without its unit, is passed over. */
  add(label: string, value: string): void {
    const { field, unit } = splitLabel(label);
    if (field === undefined || value === '') return;
    if (field === 'date' || field === 'time') this[field] ??= value.slice(0, 60);
    else if (field === 'statedTime') this.found.statedTime ??= value.slice(0, 60);
    else if (field === 'title' || field === 'instrumentSerial') this.found[field] ??= value.slice(0, 200);
    else this.addNumber(field, unit, splitValue(value));
  }

  private addNumber(
    field:
      'excitationNm' | 'laserPowerMw' | 'integrationTimeMs' | 'resolutionCm1' | 'accumulations' | 'points',
    labelUnit: Unit | undefined,
    value: { readonly number: number; readonly unit?: Unit }
  ): void {
    if (!(value.number > 0)) return;
    if (field === 'accumulations' || field === 'points') {
      if (!Number.isInteger(value.number)) return;
      if (field === 'points') this.points ??= value.number;
      else this.found.accumulations ??= value.number;
      return;
    }
    const unit = value.unit ?? labelUnit ?? this.assumed[field];
    const scale = unit === undefined ? undefined : SCALES[field]?.[unit];
    if (scale === undefined) return;
    const number = value.number * scale;
    if (field !== 'excitationNm' || isExcitationNm(number)) this.found[field] ??= number;
  }

  /** What was gathered; a date and a time on labels of their own are put together. */
  acquisition(): Acquisition {
    const parts = [this.date, this.time].filter((part) => part !== undefined);
    if (this.found.statedTime !== undefined || parts.length === 0) return { ...this.found };
    return { ...this.found, statedTime: parts.join(' ') };
  }
}

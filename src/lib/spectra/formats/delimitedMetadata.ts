import type { Acquisition } from '../spectrum';

/** Labels of header lines and the field each states; the first that matches a line counts. */
const FIELDS: readonly {
  readonly label: RegExp;
  readonly set: (value: string, number: number) => Acquisition;
}[] = [
  {
    label: /^(laser|excitation)[ _]?(wavelength|nm)?[ _]?(\(?nm\)?)?$/i,
    set: (_, excitationNm) => (excitationNm >= 200 && excitationNm <= 2000 ? { excitationNm } : {})
  },
  {
    label: /^(laser[ _]?)?power([ _]?\(?mw\)?)?$/i,
    set: (_, laserPowerMw) => (laserPowerMw > 0 ? { laserPowerMw } : {})
  },
  {
    label: /^(integration|exposure)[ _]?(time)?[ _]?\(?ms\)?$/i,
    set: (_, integrationTimeMs) => (integrationTimeMs > 0 ? { integrationTimeMs } : {})
  },
  {
    label: /^(integration|exposure)[ _]?(time)?[ _]?\(?s\)?$/i,
    set: (_, seconds) => (seconds > 0 ? { integrationTimeMs: seconds * 1000 } : {})
  },
  {
    label: /^(number of )?accumulations$/i,
    set: (_, accumulations) => (Number.isInteger(accumulations) && accumulations > 0 ? { accumulations } : {})
  },
  {
    label: /^resolution([ _]?\(?cm-1\)?)?$/i,
    set: (_, resolutionCm1) => (resolutionCm1 > 0 ? { resolutionCm1 } : {})
  },
  { label: /^(instrument )?serial( number| no\.?)?$/i, set: (instrumentSerial) => ({ instrumentSerial }) },
  { label: /^(title|sample)$/i, set: (title) => ({ title }) },
  { label: /^(date|time|acquired|date and time)$/i, set: (statedTime) => ({ statedTime }) }
];

/** What the header lines state of the measurement: `name: value` or `name = value`, comment marks aside. */
export function acquisitionOf(head: string, excitationNm?: number): Acquisition {
  let found: Acquisition = {};
  for (const line of head.split(/\r\n|\r|\n/)) {
    const bare = line.slice(0, 300).replace(/^[\s#%;/"]{1,20}/, '');
    const split = bare.search(/[:=]/);
    if (split < 1) continue;
    const label = bare.slice(0, split).trim();
    const value = bare
      .slice(split + 1)
      .trim()
      .replace(/["\s,;]{1,20}$/, '');
    if (value === '') continue;
    const number = Number(/^[+-]?\d+([.,]\d+)?/.exec(value)?.[0].replace(',', '.') ?? NaN);
    const field = FIELDS.find((candidate) => candidate.label.test(label));
    if (field) found = { ...field.set(value, number), ...found };
  }
  return excitationNm === undefined ? found : { ...found, excitationNm };
}

import type { Acquisition } from '../spectrum';
import type { Block } from './jcampLabels';

const EXCITATION = [
  'RAMANEXCITATION',
  'EXCITATIONWAVELENGTH',
  'LASERWAVELENGTH',
  'RAMANLASERWAVELENGTH',
  'EXCITATION',
  'LASER',
  '.EXCITATIONWAVELENGTH'
];

/** What a block states of its measurement; free labels are tried by their usual names. */
export function acquisitionOfBlock(block: Block, excitationNm?: number): Acquisition {
  const text = (...labels: string[]) => {
    for (const label of labels) {
      const record = block.records.find(
        (candidate) => candidate.label === label || candidate.label === `$${label}`
      );
      if (record && record.value !== '') return record.value;
    }
    return undefined;
  };
  const number = (...labels: string[]) => {
    const value = Number(/[+-]?\d{1,15}(\.\d{1,15})?/.exec(text(...labels) ?? '')?.[0] ?? NaN);
    return Number.isFinite(value) && value > 0 ? value : undefined;
  };
  const stated = number(...EXCITATION);
  const excitation =
    excitationNm ?? (stated !== undefined && stated >= 200 && stated <= 2000 ? stated : undefined);
  const found: { -readonly [Key in keyof Acquisition]: Acquisition[Key] } = {
    title: text('TITLE'),
    excitationNm: excitation,
    laserPowerMw: number('LASERPOWER', 'LASERPOWERMW'),
    integrationTimeMs: number('INTEGRATIONTIMEMS', 'EXPOSURETIMEMS'),
    accumulations: number('ACCUMULATIONS', 'AVERAGES', 'NUMBEROFACCUMULATIONS'),
    resolutionCm1: number('RESOLUTION'),
    instrumentSerial: text('SERIALNUMBER', 'INSTRUMENTSERIAL'),
    statedTime: text('LONGDATE', 'DATE')
  };
  for (const key of Object.keys(found) as (keyof Acquisition)[])
    if (found[key] === undefined) delete found[key];
  return found;
}

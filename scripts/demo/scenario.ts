import type { RoleId } from '../../src/lib/domain/roles';
import type { DemoInstrument } from './synthesise';

/**
 * The demo plant: a site, its people, its sources and instruments. All of it is invented; no real company, person or
 * product is meant.
 */
export const SITE = {
  code: 'TIM-HW',
  name: 'Tern Island Medicines, Harbour Works',
  dock: 'Receiving dock B',
  timeZone: 'Atlantic/Azores'
};

export interface DemoPerson {
  readonly userName: string;
  readonly personId: string;
  readonly printedName: string;
  readonly roles: readonly RoleId[];
  readonly password: string;
}

export const PEOPLE: readonly DemoPerson[] = [
  {
    userName: 'o.reis',
    personId: 'TIM-014',
    printedName: 'Olga Reis',
    roles: ['operator'],
    password: 'forklift-before-breakfast'
  },
  {
    userName: 't.amaral',
    personId: 'TIM-022',
    printedName: 'Tomas Amaral',
    roles: ['operator'],
    password: 'seventeen-blue-drums'
  },
  {
    userName: 'm.faria',
    personId: 'TIM-031',
    printedName: 'Mira Faria',
    roles: ['method_owner'],
    password: 'baseline-under-the-bands'
  },
  {
    userName: 'q.sousa',
    personId: 'TIM-040',
    printedName: 'Quitera Sousa',
    roles: ['approver'],
    password: 'second-pair-of-eyes'
  },
  {
    userName: 'b.nunes',
    personId: 'TIM-041',
    printedName: 'Bento Nunes',
    roles: ['approver'],
    password: 'nothing-leaves-unsigned'
  },
  {
    userName: 'a.lima',
    personId: 'TIM-052',
    printedName: 'Alba Lima',
    roles: ['auditor'],
    password: 'show-me-the-first-entry'
  },
  {
    userName: 's.pinto',
    personId: 'TIM-060',
    printedName: 'Silas Pinto',
    roles: ['administrator'],
    password: 'keys-but-no-decisions'
  }
];

export const SUPPLIERS = [
  { code: 'S1', name: 'Skerry Fine Substances' },
  { code: 'S2', name: 'Lowtide Trading' },
  { code: 'S3', name: 'Cormorant Bulk Goods' },
  { code: 'S4', name: 'Northmole Ingredients' },
  { code: 'S5', name: 'Gannet and Sons Brokers' }
];

export const MANUFACTURERS = [
  { code: 'M1', name: 'Saltmarsh Sugars', country: 'invented' },
  { code: 'M2', name: 'Breakwater Chemicals', country: 'invented' },
  { code: 'M3', name: 'Heron Point Actives', country: 'invented' },
  { code: 'M4', name: 'Tidepool Minerals', country: 'invented' }
];

/** Which manufacturer and suppliers a material comes from, by the start of its item code. */
export function sourceOf(itemCode: string): { manufacturer: string; suppliers: string[] } {
  if (/^(LAC|GLU|SUC|MAN|SOR|STA|MCC|HPM)/.test(itemCode))
    return { manufacturer: 'M1', suppliers: ['S1', 'S3'] };
  if (/^(PAR|IBU|ASA|CAF|ASC)/.test(itemCode)) return { manufacturer: 'M3', suppliers: ['S2'] };
  if (/^(CAC|SHC|SCA|TIA|TIR|TAL|NAC)/.test(itemCode)) return { manufacturer: 'M4', suppliers: ['S4'] };
  return { manufacturer: 'M2', suppliers: ['S2', 'S5'] };
}

export const INSTRUMENTS: readonly (DemoInstrument & { readonly location: string })[] = [
  {
    name: 'RM-1',
    serial: 'WF-785-0113',
    excitationNm: 785,
    fromCm1: 180,
    toCm1: 2050,
    points: 1024,
    resolutionCm1: 6,
    shiftCm1: 0.35,
    scale: 0,
    readNoise: 12,
    location: 'Receiving dock B, station 1'
  },
  {
    name: 'RM-2',
    serial: 'WF-785-0127',
    excitationNm: 785,
    fromCm1: 190,
    toCm1: 2050,
    points: 1024,
    resolutionCm1: 6.6,
    shiftCm1: -2.1,
    scale: 0.0003,
    readNoise: 15,
    location: 'Receiving dock B, station 2'
  },
  {
    name: 'RM-3',
    serial: 'WF-1064-0009',
    excitationNm: 1064,
    fromCm1: 200,
    toCm1: 2000,
    points: 512,
    resolutionCm1: 9,
    shiftCm1: 0.2,
    scale: 0,
    readNoise: 30,
    fluorescenceFactor: 0.15,
    location: 'QC laboratory'
  }
];

/** RM-2 creeps towards its limit: shift of its axis at each of its past checks, cm-1. The last is what it has now. */
export const DRIFT_CM1 = [-0.3, -0.6, -0.9, -1.3, -1.7, -2.1];

/** The instruments that references are made on, as they were when they were newly qualified. */
export const REFERENCE_INSTRUMENTS = INSTRUMENTS.slice(0, 2).map((instrument) =>
  instrument.name === 'RM-2' ? { ...instrument, shiftCm1: DRIFT_CM1[0] } : instrument
);

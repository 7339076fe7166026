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

export interface DemoScan {
  readonly container: number;
  /** What is truly in the drum; the lot's own material when absent. */
  readonly truth?: string;
  readonly linerShare?: number;
  readonly fluorescence?: number;
  readonly brightness?: number;
  readonly repeatReason?: string;
}

export interface DemoLot {
  readonly itemCode: string;
  readonly batch: string;
  readonly containers: number;
  readonly packaging: string;
  readonly scans: readonly DemoScan[];
  readonly paper: boolean;
  readonly release?: string;
}

export interface DemoDelivery {
  readonly note: string;
  readonly supplier: string;
  readonly carrier: string;
  readonly condition: string;
  readonly lots: readonly DemoLot[];
}

const each = (count: number, from = 1): DemoScan[] =>
  Array.from({ length: count }, (_, i) => ({ container: from + i }));

export const DELIVERIES: readonly DemoDelivery[] = [
  {
    note: 'SK-88101',
    supplier: 'S1',
    carrier: 'Ilheu Haulage',
    condition: '',
    lots: [
      {
        itemCode: 'LAC-M',
        batch: 'SM-4471',
        containers: 6,
        packaging: 'drum',
        scans: each(6),
        paper: true,
        release: 'All drums passed; papers complete'
      }
    ]
  },
  {
    note: 'SK-88164',
    supplier: 'S1',
    carrier: 'Ilheu Haulage',
    condition: 'One dented rim, seal whole',
    lots: [
      {
        itemCode: 'SUC',
        batch: 'SM-4502',
        containers: 8,
        packaging: 'drum',
        scans: [...each(5), { container: 6, truth: 'GLU-M' }],
        paper: true
      }
    ]
  },
  {
    note: 'LT-2207',
    supplier: 'S2',
    carrier: 'Quayside Freight',
    condition: '',
    lots: [
      { itemCode: 'CAF', batch: 'HP-771', containers: 4, packaging: 'keg', scans: each(4), paper: true },
      { itemCode: 'PAR', batch: 'HP-802', containers: 10, packaging: 'drum', scans: each(3), paper: true }
    ]
  },
  {
    note: 'LT-2213',
    supplier: 'S2',
    carrier: 'Quayside Freight',
    condition: '',
    lots: [
      { itemCode: 'GLY', batch: 'BW-3310', containers: 4, packaging: 'IBC', scans: each(4), paper: true }
    ]
  },
  {
    note: 'CB-5519',
    supplier: 'S3',
    carrier: 'Mole Road Carriers',
    condition: '',
    lots: [
      {
        itemCode: 'MCC',
        batch: 'SM-4533',
        containers: 5,
        packaging: 'sack',
        scans: [{ container: 1 }, { container: 2, fluorescence: 30, brightness: 1200 }],
        paper: false
      },
      { itemCode: 'MAN', batch: 'SM-4540', containers: 5, packaging: 'drum', scans: [], paper: false }
    ]
  },
  {
    note: 'NM-0931',
    supplier: 'S4',
    carrier: 'Mole Road Carriers',
    condition: '',
    lots: [
      {
        itemCode: 'CAC',
        batch: 'TP-118',
        containers: 3,
        packaging: 'sack',
        scans: [{ container: 1 }, { container: 2, linerShare: 0.97 }],
        paper: true
      },
      { itemCode: 'NAC', batch: 'TP-120', containers: 2, packaging: 'sack', scans: [], paper: true }
    ]
  }
];

import type { CauseCategory } from '../../src/lib/domain/deviations';
import type { Verdict } from '../../src/lib/identity/decision';
import type { DemoExposure } from './synthesise';

/** What happens to a lot of the demo, one thing after the other. All invented. */
export type DemoStep =
  | DemoScan
  | { readonly do: 'set-aside'; readonly container: number; readonly reason: string }
  | {
      readonly do: 'ask-repeat';
      readonly container: number;
      readonly cause: string;
      readonly reason: string;
    }
  | {
      readonly do: 'decide-repeat';
      readonly container: number;
      readonly outcome: 'granted' | 'declined';
      readonly reason: string;
    }
  | { readonly do: 'note'; readonly container: number; readonly note: string }
  | {
      readonly do: 'conclude';
      readonly container: number;
      readonly causeCategory: CauseCategory;
      readonly cause: string;
      readonly impact: string;
      readonly action: string;
    }
  | { readonly do: 'limit-test'; readonly report: string }
  | { readonly do: 'release' | 'reject'; readonly reason: string };

export interface DemoScan {
  readonly do: 'scan';
  readonly container: number;
  /** What comes of it; a test holds the demo to it. */
  readonly verdict: Verdict;
  readonly instrument?: 'RM-1' | 'RM-2' | 'RM-3';
  /** What is truly in the drum; the lot's own material when absent. */
  readonly truth?: string;
  readonly linerShare?: number;
  readonly fluorescence?: number;
  readonly brightness?: number;
  readonly exposure?: DemoExposure;
  readonly repeatReason?: string;
}

export interface DemoLot {
  readonly itemCode: string;
  readonly batch: string;
  readonly containers: number;
  readonly packaging: string;
  /** Whether the supplier's certificate came with it. */
  readonly paper: boolean;
  readonly steps: readonly DemoStep[];
}

export interface DemoDelivery {
  readonly note: string;
  readonly supplier: string;
  readonly carrier: string;
  readonly condition: string;
  readonly lots: readonly DemoLot[];
}

type ScanMore = Partial<Omit<DemoScan, 'do' | 'container'>>;

const scan = (container: number, more: ScanMore = {}): DemoScan => ({
  do: 'scan',
  container,
  verdict: 'pass',
  ...more
});

/** Passing scans of containers `from` to `to`. */
const each = (from: number, to: number, more: ScanMore = {}): DemoScan[] =>
  Array.from({ length: to - from + 1 }, (_, i) => scan(from + i, more));

/** Fluorescence so strong that a frame of two seconds would be at its ceiling: many short frames, added up. */
const FLUORESCENT = {
  fluorescence: 400,
  brightness: 400_000,
  exposure: { integrationTimeMs: 30, accumulations: 4000 },
  verdict: 'invalid'
} as const;

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
        paper: true,
        steps: [
          ...each(1, 4),
          ...each(5, 6, { instrument: 'RM-2' }),
          { do: 'release', reason: 'All drums passed; papers complete' }
        ]
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
        paper: true,
        // The wrong drum: another sugar under a sucrose label.
        steps: [
          ...each(1, 5),
          scan(6, { truth: 'GLU-M', verdict: 'fail' }),
          {
            do: 'ask-repeat',
            container: 6,
            cause: 'measurement',
            reason: 'The window may have stood on a fold of the liner'
          }
        ]
      }
    ]
  },
  {
    note: 'LT-2207',
    supplier: 'S2',
    carrier: 'Quayside Freight',
    condition: '',
    lots: [
      {
        itemCode: 'CAF',
        batch: 'HP-771',
        containers: 4,
        packaging: 'keg',
        paper: true,
        steps: each(1, 4)
      },
      {
        itemCode: 'PAR',
        batch: 'HP-802',
        containers: 10,
        packaging: 'drum',
        paper: true,
        steps: each(1, 3)
      },
      {
        itemCode: 'ASC',
        batch: 'HP-790',
        containers: 3,
        packaging: 'drum',
        paper: true,
        // A failed scan with a cause outside the goods: repeated under a grant, both results stay.
        steps: [
          scan(1),
          scan(2, { linerShare: 0.6, verdict: 'fail' }),
          scan(3),
          {
            do: 'ask-repeat',
            container: 2,
            cause: 'packaging',
            reason: 'The inner bag was folded: three layers of liner under the window'
          },
          { do: 'note', container: 2, note: 'Bag opened in the sampling booth; the fold is plain to see.' },
          {
            do: 'decide-repeat',
            container: 2,
            outcome: 'granted',
            reason: 'A fold is an assignable cause; one repeat through a single layer'
          },
          scan(2, { repeatReason: 'Granted repeat through a single layer' }),
          {
            do: 'conclude',
            container: 2,
            causeCategory: 'packaging',
            cause: 'Three layers of liner under the window',
            impact: 'None on the goods: the repeat through one layer passed',
            action: 'Operators smooth the liner before they scan'
          },
          { do: 'release', reason: 'Cause found outside the goods; both results read' }
        ]
      }
    ]
  },
  {
    note: 'LT-2213',
    supplier: 'S2',
    carrier: 'Quayside Freight',
    condition: '',
    lots: [
      // Every container passed, and yet no release: the glycol limit test is missing.
      {
        itemCode: 'GLY',
        batch: 'BW-3310',
        containers: 4,
        packaging: 'IBC',
        paper: true,
        steps: each(1, 4)
      },
      { itemCode: 'GLY', batch: 'BW-3312', containers: 3, packaging: 'drum', paper: true, steps: [] },
      {
        itemCode: 'PRG',
        batch: 'BW-3288',
        containers: 2,
        packaging: 'drum',
        paper: true,
        steps: [
          ...each(1, 2),
          { do: 'limit-test', report: 'QC-26-0418 (demo)' },
          { do: 'release', reason: 'Identity and glycol limit test both comply' }
        ]
      }
    ]
  },
  {
    note: 'CB-5519',
    supplier: 'S3',
    carrier: 'Mole Road Carriers',
    condition: '',
    lots: [
      // A fluorescent lot: no result, whatever is tried; after the third time the sack waits for a person.
      {
        itemCode: 'MCC',
        batch: 'SM-4533',
        containers: 5,
        packaging: 'sack',
        paper: false,
        steps: [
          scan(1, FLUORESCENT),
          scan(2, FLUORESCENT),
          scan(2, { ...FLUORESCENT, repeatReason: 'Window wiped' }),
          scan(2, { ...FLUORESCENT, repeatReason: 'Another place on the sack' })
        ]
      },
      { itemCode: 'MAN', batch: 'SM-4540', containers: 5, packaging: 'drum', paper: false, steps: [] }
    ]
  },
  {
    note: 'NM-0931',
    supplier: 'S4',
    carrier: 'Mole Road Carriers',
    condition: 'One sack torn at the seam',
    lots: [
      {
        itemCode: 'CAC',
        batch: 'TP-118',
        containers: 4,
        packaging: 'sack',
        paper: true,
        // Sack 2: hardly anything but liner in the light.
        steps: [
          scan(1),
          scan(2, { linerShare: 0.97, verdict: 'fail' }),
          { do: 'note', container: 2, note: 'The sack holds an empty inner bag on top of the goods.' },
          { do: 'set-aside', container: 3, reason: 'Torn at the seam; taken to the sampling booth' }
        ]
      },
      // The other form of the same oxide in every sack: rejected.
      {
        itemCode: 'TIA',
        batch: 'TP-109',
        containers: 2,
        packaging: 'sack',
        paper: true,
        steps: [
          scan(1, { truth: 'TIR', verdict: 'fail' }),
          scan(2, { truth: 'TIR', verdict: 'fail' }),
          {
            do: 'note',
            container: 1,
            note: 'Rutile in both sacks, by X-ray diffraction of retained samples (demo).'
          },
          ...[1, 2].map((container) => ({
            do: 'conclude' as const,
            container,
            causeCategory: 'wrong_material' as const,
            cause: 'The manufacturer packed rutile under an anatase label',
            impact: 'This lot only: no other lot of the batch is on site',
            action: 'Lot rejected and sent back; the source is audited'
          })),
          { do: 'reject', reason: 'Rutile under an anatase label' }
        ]
      },
      { itemCode: 'NAC', batch: 'TP-120', containers: 2, packaging: 'sack', paper: true, steps: [] }
    ]
  }
];

/** What a lot's steps scan, in order. */
export const scansOf = (lot: DemoLot): DemoScan[] => lot.steps.filter((step) => step.do === 'scan');

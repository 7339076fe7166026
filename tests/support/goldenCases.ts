import type { DecideRequest } from '$lib/identity/decide';
import type { Verdict } from '$lib/identity/decision';
import type { ScanOptions } from './madeMethods';

/** One frozen decision: a made scan under a claimed material. */
export interface GoldenCase {
  readonly id: string;
  readonly claimed: string;
  readonly scanned: string;
  readonly options: ScanOptions;
  readonly expected: Verdict;
  readonly why: string;
  readonly more?: Partial<DecideRequest>;
}

const seeded = (name: string, more: ScanOptions = {}): ScanOptions => ({
  lotSeed: `golden lot ${name}`,
  scanSeed: `golden scan ${name}`,
  ...more
});

/** The cases, each for a way a decision can come about. */
export const goldenCases = (): readonly GoldenCase[] => [
  genuine('LAC-M', 'a sugar with many sharp bands'),
  genuine('MCC', 'broad bands on strong fluorescence'),
  genuine('GLY', 'a liquid with broad bands'),
  genuine('CAC', 'few narrow bands'),
  genuine('TIR', 'very broad bands: the derivative has its widest window'),
  genuine('SUC', 'faint: the allowance for noise is at work', { brightness: 2500 }, 'faint'),
  genuine('PAR', 'three cosmic spikes, mended', { spikes: 3 }, 'spikes'),
  genuine('CAF', 'a tenth of the light comes from the liner', { linerShare: 0.1 }, 'liner'),
  other('LAC-M', 'LAC-A', 'another form of the same sugar'),
  other('SUC', 'GLU-M', 'another sugar'),
  other('GLY', 'PRG', 'the liquid that has harmed people in its place'),
  other('CAC', 'TIR', 'nothing in common'),
  {
    id: 'PAR under much liner',
    claimed: 'PAR',
    scanned: 'PAR',
    options: seeded('much liner', { linerShare: 0.17 }),
    expected: 'inconclusive',
    why: 'bands of the liner stand just above what is allowed'
  },
  {
    id: 'PAR too faint',
    claimed: 'PAR',
    scanned: 'PAR',
    options: seeded('too faint', { brightness: 250 }),
    expected: 'invalid',
    why: 'a gate refuses the measurement before any score'
  },
  {
    id: 'PAR on an axis that is off and corrected',
    claimed: 'PAR',
    scanned: 'PAR',
    options: seeded('corrected'),
    expected: 'pass',
    why: 'the correction of the instrument check is applied before the recipe',
    more: { check: { state: 'valid', correction: { shiftCm1: 0.4, scale: -0.0003 } } }
  }
];

function genuine(itemCode: string, why: string, more: ScanOptions = {}, name = 'as itself'): GoldenCase {
  const id = `${itemCode} ${name}`;
  return { id, claimed: itemCode, scanned: itemCode, options: seeded(id, more), expected: 'pass', why };
}

function other(claimed: string, scanned: string, why: string): GoldenCase {
  const id = `${scanned} as ${claimed}`;
  return { id, claimed, scanned, options: seeded(id), expected: 'fail', why };
}

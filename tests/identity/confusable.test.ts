import { beforeAll, describe, expect, it } from 'vitest';
import { decide } from '$lib/identity/decide';
import type { Verdict } from '$lib/identity/decision';
import type { Library } from '$lib/identity/method';
import { clopperPearson } from '$lib/spectra/statistics/clopperPearson';
import { asFile, libraryOf, madeMethod, madeScan, requestFor, type MadeMethod } from '../support/madeMethods';

/**
 * Materials that are easily taken for each other. Made from published bands (reference/materials), so the figures
 * say how the engine treats such spectra, not how real lots differ.
 */
const FAMILIES: Readonly<Record<string, readonly string[]>> = {
  'lactose forms': ['LAC-M', 'LAC-A'],
  'sugars and polyols': ['GLU-M', 'SUC', 'MAN', 'SOR'],
  'cellulose, starch, hypromellose': ['MCC', 'STA', 'HPM'],
  liquids: ['GLY', 'PRG', 'MAC'],
  stearates: ['STE', 'MGS'],
  carbonates: ['CAC', 'SHC', 'SCA'],
  'titanium dioxide forms': ['TIA', 'TIR'],
  'citric acid forms': ['CIT-A', 'CIT-M']
};
const MEMBERS = Object.values(FAMILIES).flat();
/** Lots no reference was made of. */
const NEW_LOTS = 8;
/** Counts of the strongest band that bring the demo's instrument to a signal-to-noise ratio near 30. */
const FAINT = 1000;

interface Challenge {
  readonly family: string;
  readonly truth: string;
  readonly claimed: string;
  readonly verdict: Verdict;
  readonly signalToNoise: number;
}

const challenges: Challenge[] = [];
const methods = new Map<string, MadeMethod>();
let library: Library;

function challengeAll(family: string, members: readonly string[]): void {
  for (const truth of members) {
    for (let lot = 0; lot < NEW_LOTS; lot++) {
      const bytes = asFile(
        madeScan(truth, {
          lotSeed: `${truth} new ${lot}`,
          scanSeed: `${truth} faint ${lot}`,
          brightness: FAINT
        })
      );
      for (const claimed of members) {
        const { verdict, scores } = decide(requestFor(methods.get(claimed) as MadeMethod, library, bytes));
        challenges.push({ family, truth, claimed, verdict, signalToNoise: scores?.signalToNoise ?? 0 });
      }
    }
  }
}

beforeAll(() => {
  for (const itemCode of MEMBERS) methods.set(itemCode, madeMethod(itemCode));
  library = libraryOf([...methods.values()].map((made) => made.entry));
  for (const [family, members] of Object.entries(FAMILIES)) challengeAll(family, members);
}, 60_000);

const genuine = (family?: string) =>
  challenges.filter((c) => c.truth === c.claimed && (family === undefined || c.family === family));
const strange = (family?: string) =>
  challenges.filter((c) => c.truth !== c.claimed && (family === undefined || c.family === family));
const passed = (list: readonly Challenge[]) => list.filter((c) => c.verdict === 'pass').length;

function rate(name: string, count: number, of: number): string {
  const { low, high } = clopperPearson(count, of, 0.95);
  const percent = (value: number) => `${(100 * value).toFixed(1)} %`;
  return `${name} ${percent(count / of)} (${count} of ${of}, 95 % bounds ${percent(low)} to ${percent(high)})`;
}

describe('new lots measured faintly, within families that are easily confused', () => {
  it('the scans are as faint as they are meant to be', () => {
    const ratios = genuine()
      .map((c) => c.signalToNoise)
      .sort((a, b) => a - b);
    const middle = ratios[ratios.length >> 1];
    console.log(
      `signal-to-noise ratio: ${ratios[0].toFixed(0)} to ${ratios[ratios.length - 1].toFixed(0)}, median ${middle.toFixed(0)}`
    );
    expect(middle).toBeGreaterThan(20);
    expect(middle).toBeLessThan(45);
  });

  it.each(Object.keys(FAMILIES))('R-101: none of %s passes as another of them', (family) => {
    const own = genuine(family);
    const others = strange(family);
    console.log(
      `${family}: ${rate('sensitivity', passed(own), own.length)}; ${rate('specificity', others.length - passed(others), others.length)}`
    );
    expect(others.filter((c) => c.verdict === 'pass')).toEqual([]);
  });

  const pairs: readonly [string, string][] = [
    ['LAC-M', 'LAC-A'],
    ['GLU-M', 'SUC'],
    ['GLY', 'PRG']
  ];
  it.each(pairs)('%s and %s are never confused: one fails as the other, each time', (a, b) => {
    const between = strange().filter((c) => [c.truth, c.claimed].sort().join() === [a, b].sort().join());
    expect(between).toHaveLength(2 * NEW_LOTS);
    expect(between.every((c) => c.verdict === 'fail')).toBe(true);
  });

  it('a genuine new lot is seldom turned away, though measured faintly', () => {
    const own = genuine();
    const failed = own.filter((c) => c.verdict === 'fail').length;
    console.log(`all: ${rate('pass', passed(own), own.length)}; ${rate('fail', failed, own.length)}`);
    expect(clopperPearson(failed, own.length, 0.95).high).toBeLessThan(0.05);
    expect(passed(own) / own.length).toBeGreaterThan(0.9);
  });
});

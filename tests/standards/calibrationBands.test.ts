import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { checkWavenumbers, type WavenumberCheck } from '$lib/spectra/axis/wavenumberCheck';
import { readTwoColumns, sharedPath } from '../support/sharedData';

/**
 * Positions: ASTM E1840-96(2022), table of Raman shift standards (text found); standard deviations from memory.
 * Spectra: CHARISMA project, polystyrene on three instruments (MIT licence), read where they are at hand.
 */
const POLYSTYRENE = {
  name: 'polystyrene',
  bands: [
    { shiftCm1: 620.9, sdCm1: 0.69 },
    { shiftCm1: 795.8, sdCm1: 0.78 },
    { shiftCm1: 1001.4, sdCm1: 0.54 },
    { shiftCm1: 1031.8, sdCm1: 0.43 },
    { shiftCm1: 1155.3, sdCm1: 0.56 },
    { shiftCm1: 1450.5, sdCm1: 0.56 },
    { shiftCm1: 1583.1, sdCm1: 0.86 },
    { shiftCm1: 1602.3, sdCm1: 0.73 }
  ]
};

/** Laboratory and handheld tolerances of Ph. Eur. 2.2.48 for polystyrene: from memory, low confidence; settings. */
const LABORATORY = [620.9, 1001.4, 1031.8, 1602.3].map((shiftCm1) => ({ shiftCm1, toleranceCm1: 1.5 }));
const HANDHELD = [
  { shiftCm1: 620.9, toleranceCm1: 2.5 },
  { shiftCm1: 1001.4, toleranceCm1: 2.5 },
  { shiftCm1: 1031.8, toleranceCm1: 2.5 },
  { shiftCm1: 1602.3, toleranceCm1: 3.0 }
];

/** CEN CWA 18133:2024, Table 7 (text found); natural width of the 1085.91 band: Itoh 2025, 1.36 cm-1. */
const CALCITE = {
  name: 'calcite',
  bands: [{ shiftCm1: 281.26 }, { shiftCm1: 711.95 }, { shiftCm1: 1085.91, naturalFwhmCm1: 1.36 }]
};

const checkFile = (path: string, tolerances: typeof LABORATORY) =>
  checkWavenumbers(readTwoColumns(path), POLYSTYRENE, tolerances);

const judged = (check: WavenumberCheck) => check.bands.filter((band) => band.within !== null);

describe('real polystyrene on real instruments', () => {
  const folder = sharedPath('spectra/calibration/polystyrene');
  const files = folder === null ? [] : readdirSync(folder).filter((name) => name.endsWith('.csv'));
  const named = (letter: string) => files.filter((name) => name.startsWith(`instrument-${letter}-`));
  const at = (name: string) => join(folder ?? '', name);

  it('there are seven spectra of three instruments where the folder is at hand', () => {
    if (folder === null) return;
    expect([named('a').length, named('b').length, named('c').length]).toEqual([3, 2, 2]);
  });

  it('instrument a is within the laboratory tolerance at every judged band, by every objective', () => {
    for (const name of named('a')) {
      const check = checkFile(at(name), LABORATORY);
      expect(check.pass).toBe(true);
      const deviations = judged(check).map((band) => band.deviationCm1 ?? Number.NaN);
      expect(deviations).toHaveLength(4);
      // All four within 0.75 of the published place, half the tolerance; the strongest within a tenth of a step.
      deviations.forEach((deviation) => expect(Math.abs(deviation)).toBeLessThan(0.75));
      expect(Math.abs(deviations[1])).toBeLessThan(0.2);
    }
  });

  it('instrument a gives the same places by three objectives, to 0.35 cm-1', () => {
    const found = named('a').map((name) =>
      judged(checkFile(at(name), LABORATORY)).map((band) => band.foundCm1!)
    );
    for (const band of found[0]?.keys() ?? []) {
      const places = found.map((one) => one[band]);
      expect(Math.max(...places) - Math.min(...places)).toBeLessThan(0.35);
    }
  });

  it('instrument b, coarser, is within the laboratory tolerance too', () => {
    for (const name of named('b')) expect(checkFile(at(name), LABORATORY).pass).toBe(true);
  });

  it('instrument c by its first path fails the laboratory tolerance at 1602.3 alone and passes the handheld one', () => {
    for (const name of named('c').filter((file) => file.includes('path1'))) {
      const check = checkFile(at(name), LABORATORY);
      expect(
        judged(check)
          .filter((band) => !band.within)
          .map((band) => band.expectedCm1)
      ).toEqual([1602.3]);
      expect(checkFile(at(name), HANDHELD).pass).toBe(true);
    }
  });

  it('instrument c by its second path is off by 3 to 4 cm-1 at every band and fails both', () => {
    for (const name of named('c').filter((file) => file.includes('path2'))) {
      const check = checkFile(at(name), HANDHELD);
      expect(check.pass).toBe(false);
      expect(check.reasons).toHaveLength(4);
      for (const band of judged(check)) {
        expect(band.deviationCm1!).toBeGreaterThan(2.5);
        expect(band.deviationCm1!).toBeLessThan(4.7);
      }
      // What correction it would take is told all the same.
      expect(check.correction.shiftCm1).toBeLessThan(-3);
    }
  });

  it('calcite tells the resolution of the instruments apart: a below 4, b 5 to 6, c above 10 cm-1', () => {
    const calcite = sharedPath('spectra/calibration/calcite-synthetic');
    if (calcite === null) return;
    for (const name of readdirSync(calcite)) {
      const { resolution } = checkWavenumbers(readTwoColumns(join(calcite, name)), CALCITE, []);
      const width = resolution?.instrumentFwhmCm1 ?? Number.NaN;
      const [low, high] = name.startsWith('instrument-a')
        ? [2.5, 4]
        : name.startsWith('instrument-b')
          ? [5, 6]
          : [10, 13];
      expect(width).toBeGreaterThan(low);
      expect(width).toBeLessThan(high);
    }
  });
});

import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { despike, differenceScale, findSpikes } from '$lib/spectra/preprocess/despike';
import { lorentzians } from '../../support/madeSpectra';
import { onUniformAxis } from '../../support/preprocessCurve';
import { readTwoColumns, sharedPath } from '../../support/sharedData';

const usual = despike.defaults;
const made = lorentzians(
  { from: 300, to: 1800, step: 2 },
  [
    { centreCm1: 600, height: 5000, fwhmCm1: 8 },
    { centreCm1: 1000, height: 20000, fwhmCm1: 10 },
    { centreCm1: 1100, height: 900, fwhmCm1: 60 }
  ],
  { sd: 15, seed: 11 }
);
const withLeap = (at: number, heights: readonly number[]) => {
  const intensity = made.intensity.slice();
  heights.forEach((height, k) => (intensity[at + k] += height));
  return { shiftCm1: made.shiftCm1, intensity };
};

describe('removing cosmic spikes', () => {
  it('leaves a spectrum of narrow strong bands and little noise as it is, where the bare threshold would not', () => {
    const { median, sigma } = differenceScale(made.intensity);
    const steep = made.intensity
      .slice(1)
      .filter((v, i) => Math.abs(v - made.intensity[i] - median) > 7 * sigma);
    expect(steep.length).toBeGreaterThan(10);
    expect(findSpikes(made.intensity, usual)).toEqual([]);
    expect([...despike.apply(made, usual, {}).intensity]).toEqual([...made.intensity]);
  });

  it.each([
    ['one point wide', [4000]],
    ['two points wide', [4000, 2500]],
    ['three points wide', [900, 4000, 1200]],
    ['a dead pixel', [-4000]]
  ])('finds a spike, %s, and nothing else', (_, heights) => {
    const spiked = withLeap(300, heights);
    expect(findSpikes(spiked.intensity, usual)).toEqual([{ start: 300, end: 300 + heights.length }]);
    const { intensity } = despike.apply(spiked, usual, {});
    for (let i = 0; i < intensity.length; i++) {
      if (i < 300 || i >= 300 + heights.length) expect(intensity[i]).toBe(spiked.intensity[i]);
      else expect(Math.abs(intensity[i] - made.intensity[i])).toBeLessThan(90);
    }
  });

  it('finds a spike on the flank of a band when it is steeper than the flank', () => {
    const flank = made.shiftCm1.findIndex((x) => x === 992);
    const spiked = withLeap(flank, [30_000]);
    expect(findSpikes(spiked.intensity, usual)).toEqual([{ start: flank, end: flank + 1 }]);
  });

  it('leaves a leap wider than it may be, and one that does not come back', () => {
    expect(findSpikes(withLeap(300, [4000, 4000, 4000, 4000]).intensity, usual)).toEqual([]);
    const step = made.intensity.map((value, i) => value + (i > 300 ? 4000 : 0));
    expect(findSpikes(step, usual)).toEqual([]);
  });

  it('leaves the first and the last point: a spike there cannot be told from a cut band', () => {
    expect(findSpikes(withLeap(0, [4000]).intensity, usual)).toEqual([]);
    expect(findSpikes(withLeap(made.intensity.length - 1, [4000]).intensity, usual)).toEqual([]);
  });

  it('fills from unflagged points alone, looking further where a spike is wider than the window', () => {
    const y = [5, 5, 6, 5, 90, 80, 90, 5, 5, 6, 5, 90, 5, 6, 5, 5, 5, 5, 6, 5];
    const { intensity } = despike.apply(onUniformAxis(y), { ...usual, window: 1 }, {});
    expect([...intensity.slice(4, 7)]).toEqual([5, 5, 5]);
    expect(intensity[11]).toBe(5);
  });

  it('still works where more than half the differences are equal (coarse counts, MAD zero)', () => {
    const y = new Array<number>(60).fill(3);
    y[20] = 4;
    y[40] = 90;
    expect(findSpikes(Float64Array.from(y), usual)).toEqual([{ start: 40, end: 41 }]);
    expect(findSpikes(new Float64Array(60).fill(3), usual)).toEqual([]);
  });

  const folders = ['calibration', 'solvents', 'packaging', 'polymers'].map((name) =>
    sharedPath(`spectra/${name}`)
  );
  it.skipIf(folders.includes(null))(
    'takes nothing away from real spectra, and finds spikes planted in them',
    () => {
      let planted = 0;
      let found = 0;
      for (const file of folders.flatMap((folder) => csvFiles(folder ?? ''))) {
        const { intensity } = readTwoColumns(file);
        expect(findSpikes(intensity, usual), file).toEqual([]);
        const { sigma } = differenceScale(intensity);
        for (let i = 20; i < intensity.length - 20; i += 97) {
          const spiked = intensity.slice();
          spiked[i] += 20 * sigma;
          planted++;
          if (findSpikes(spiked, usual).some(({ start, end }) => start <= i && i < end)) found++;
        }
      }
      expect(planted).toBeGreaterThan(1000);
      // The rest stand on flanks as steep as themselves.
      expect(found / planted).toBeGreaterThan(0.9);
    }
  );
});

function csvFiles(folder: string): string[] {
  return readdirSync(folder, { recursive: true, encoding: 'utf8' })
    .filter((name) => name.endsWith('.csv'))
    .map((name) => join(folder, name));
}

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { findBands } from '$lib/spectra/peaks/find';
import { fitBand } from '$lib/spectra/peaks/fit';
import { noiseLevel, signalToNoise } from '$lib/spectra/peaks/noise';
import { findSaturation } from '$lib/spectra/peaks/saturation';
import { solveSymmetric } from '$lib/spectra/peaks/solveSymmetric';
import '../support/fixedSeed';
import { lorentzians, seededNormal } from '../support/madeSpectra';

const axis = { from: 400, to: 1800, step: 2 };
const BANDS = [
  { centreCm1: 620.9, height: 16, fwhmCm1: 7 },
  { centreCm1: 1001.4, height: 100, fwhmCm1: 7 },
  { centreCm1: 1031.8, height: 27, fwhmCm1: 9 },
  { centreCm1: 1602.3, height: 28, fwhmCm1: 9 }
];

describe('the noise of a spectrum', () => {
  it('is read within a few percent from noise alone', () => {
    const normal = seededNormal(1);
    const noise = Float64Array.from({ length: 4000 }, () => 3 * normal());
    expect(noiseLevel(noise)).toBeGreaterThan(2.85);
    expect(noiseLevel(noise)).toBeLessThan(3.15);
  });

  it('is not read much higher for bands with long Lorentzian tails or a sloping background', () => {
    const { intensity } = lorentzians(axis, BANDS, { sd: 0.5, seed: 2 });
    const sloping = intensity.map((value, i) => value + 0.05 * i + 1e-4 * i * i);
    expect(noiseLevel(sloping)).toBeGreaterThan(0.44);
    expect(noiseLevel(sloping)).toBeLessThan(0.6);
  });

  it('scales with the spectrum and does not see an offset', () => {
    const { intensity } = lorentzians(axis, BANDS, { sd: 0.5, seed: 3 });
    expect(noiseLevel(intensity.map((value) => 4 * value))).toBeCloseTo(4 * noiseLevel(intensity), 12);
    expect(noiseLevel(intensity.map((value) => value + 1024))).toBeCloseTo(noiseLevel(intensity), 9);
  });

  it('is zero for a noiseless straight line and for fewer than three points', () => {
    expect(noiseLevel(Float64Array.from({ length: 50 }, (_, i) => 2 * i))).toBe(0);
    expect(noiseLevel(new Float64Array(2))).toBe(0);
  });
});

describe('the signal-to-noise ratio', () => {
  it('is the strongest band over the noise', () => {
    const { intensity } = lorentzians(axis, BANDS, { sd: 0.5, seed: 4 });
    const { ratio } = signalToNoise(intensity);
    expect(ratio).toBeGreaterThan(150);
    expect(ratio).toBeLessThan(220);
  });

  it('of noise alone is small', () => {
    for (let seed = 1; seed <= 20; seed++) {
      const normal = seededNormal(seed);
      expect(signalToNoise(Float64Array.from({ length: 1500 }, () => normal())).ratio).toBeLessThan(4);
    }
  });

  it('of a noiseless spectrum stays a number, and of a flat one is zero', () => {
    const line = Float64Array.from({ length: 40 }, (_, i) => (i === 20 ? 9 : 0));
    expect(signalToNoise(line).ratio).toBe(1e6);
    expect(signalToNoise(new Float64Array(40).fill(3)).ratio).toBe(0);
  });
});

describe('a saturated detector', () => {
  const counts = lorentzians(axis, BANDS, { sd: 0.5, seed: 5 }).intensity.map((value) =>
    Math.round(600 * value + 900)
  );

  it('shows a flat top', () => {
    const clipped = counts.map((value) => Math.min(value, 40_000));
    const { saturated, points, run } = findSaturation(clipped);
    expect(saturated).toBe(true);
    expect(points).toBeGreaterThanOrEqual(3);
    expect(clipped[run!.first]).toBe(40_000);
    expect(run!.last - run!.first + 1).toBeLessThanOrEqual(points);
  });

  it('shows on fluorescence as a long plateau', () => {
    const hill = Float64Array.from({ length: 800 }, (_, i) =>
      Math.min(65_535, Math.round(90_000 * Math.exp(-(((i - 400) / 250) ** 2))))
    );
    expect(findSaturation(hill).saturated).toBe(true);
  });

  it('shows when two bands are cut at the same height, two points each', () => {
    const y = Float64Array.from({ length: 300 }, (_, i) => i % 7);
    for (const at of [50, 51, 150, 151]) y[at] = 4095;
    expect(findSaturation(y).saturated).toBe(true);
  });

  it('is not seen in an ordinary spectrum, in one of few levels, nor in a flat line', () => {
    expect(findSaturation(counts).saturated).toBe(false);
    expect(findSaturation(Float64Array.from({ length: 200 }, (_, i) => (i >> 2) % 5)).saturated).toBe(false);
    expect(findSaturation(new Float64Array(100).fill(7)).saturated).toBe(false);
  });

  it('is not seen where two neighbours happen to share the maximum', () => {
    const y = Float64Array.from(counts);
    const top = y.indexOf(Math.max(...y));
    y[top + 1] = y[top];
    expect(findSaturation(y).saturated).toBe(false);
  });
});

describe('bands found', () => {
  it('are those put in, near their places, with their heights and widths', () => {
    const found = findBands(lorentzians(axis, BANDS, { sd: 0.3, seed: 6 }));
    expect(found).toHaveLength(4);
    found.forEach((band, k) => {
      expect(Math.abs(band.shiftCm1 - BANDS[k].centreCm1)).toBeLessThan(1);
      expect(Math.abs(band.height / BANDS[k].height - 1)).toBeLessThan(0.15);
      expect(Math.abs(band.fwhmCm1 / BANDS[k].fwhmCm1 - 1)).toBeLessThan(0.3);
    });
  });

  it('are none in noise alone', () => {
    for (let seed = 1; seed <= 30; seed++) {
      const found = findBands(lorentzians(axis, [], { sd: 1, seed }), { noiseMultiple: 8 });
      expect(found).toEqual([]);
    }
  });

  it('of a flat top count once, in the middle; half a band at the end of the axis does not count', () => {
    const shiftCm1 = Float64Array.from({ length: 9 }, (_, i) => i);
    const intensity = Float64Array.from([9, 1, 5, 5, 5, 1, 0, 3, 8]);
    const found = findBands({ shiftCm1, intensity }, { noise: 0 });
    expect(found.map((band) => band.index)).toEqual([3]);
  });

  it('carry prominence: a shoulder is measured from its saddle', () => {
    const shiftCm1 = Float64Array.from({ length: 7 }, (_, i) => i);
    const found = findBands({ shiftCm1, intensity: Float64Array.from([0, 10, 6, 8, 0, 4, 0]) }, { noise: 0 });
    expect(found.map((band) => band.prominence)).toEqual([10, 2, 4]);
  });

  it('do not depend on a constant added to the spectrum', () => {
    const spectrum = lorentzians(axis, BANDS, { sd: 0.3, seed: 7 });
    const raised = { ...spectrum, intensity: spectrum.intensity.map((value) => value + 256) };
    expect(findBands(raised).map((band) => band.index)).toEqual(
      findBands(spectrum).map((band) => band.index)
    );
  });
});

describe('a fitted band', () => {
  const window = (centreCm1: number) => ({
    nearCm1: centreCm1 + 0.7,
    widthCm1: 8,
    fromCm1: centreCm1 - 14,
    toCm1: centreCm1 + 14
  });

  it('gives back an exact Lorentzian on a slope, whatever its place between the points', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 900, max: 910, noNaN: true }),
        fc.double({ min: 5, max: 12, noNaN: true }),
        fc.double({ min: -2, max: 2, noNaN: true }),
        (centreCm1, fwhmCm1, slope) => {
          const spectrum = lorentzians(axis, [{ centreCm1, height: 50, fwhmCm1 }]);
          const tilted = { ...spectrum, intensity: spectrum.intensity.map((v, i) => v + 200 + slope * i) };
          for (const shape of ['lorentzian', 'pseudo-voigt'] as const) {
            const fit = fitBand(tilted, window(centreCm1), shape);
            expect(fit).not.toBeNull();
            expect(Math.abs(fit!.centreCm1 - centreCm1)).toBeLessThan(1e-4);
            expect(Math.abs(fit!.fwhmCm1 / fwhmCm1 - 1)).toBeLessThan(1e-2);
          }
        }
      ),
      { numRuns: 60 }
    );
  });

  it('tells a Gaussian from a Lorentzian', () => {
    const { shiftCm1 } = lorentzians(axis, []);
    const gauss = shiftCm1.map((x) => 40 * Math.exp(-4 * Math.LN2 * ((x - 905.3) / 9) ** 2));
    const fit = fitBand({ shiftCm1, intensity: gauss }, window(905.3));
    expect(fit!.lorentzian).toBeLessThan(0.02);
    expect(Math.abs(fit!.centreCm1 - 905.3)).toBeLessThan(1e-4);
    expect(Math.abs(fit!.fwhmCm1 - 9)).toBeLessThan(0.05);
  });

  it('has a standard error that matches the scatter of its centre in repeated noise', () => {
    const offsets: number[] = [];
    let stated = 0;
    for (let seed = 1; seed <= 200; seed++) {
      const spectrum = lorentzians(axis, [{ centreCm1: 905.3, height: 50, fwhmCm1: 9 }], { sd: 1, seed });
      const fit = fitBand(spectrum, window(905.3), 'lorentzian')!;
      offsets.push(fit.centreCm1 - 905.3);
      stated += fit.centreErrorCm1 / 200;
    }
    const sd = Math.sqrt(offsets.reduce((sum, value) => sum + value * value, 0) / offsets.length);
    expect(stated / sd).toBeGreaterThan(0.8);
    expect(stated / sd).toBeLessThan(1.25);
    // A fiftieth of the point spacing would be out of reach for the highest point alone.
    expect(sd).toBeLessThan(0.1);
  });

  it('is the same bits every time', () => {
    const spectrum = lorentzians(axis, BANDS, { sd: 0.5, seed: 8 });
    expect(fitBand(spectrum, window(1001.4))).toEqual(fitBand(spectrum, window(1001.4)));
  });

  it('is null where there is no band to fit or too few points', () => {
    const flat = { ...lorentzians(axis, []), intensity: new Float64Array(701).fill(5) };
    expect(fitBand(flat, window(905))).toBeNull();
    const spectrum = lorentzians(axis, BANDS);
    expect(fitBand(spectrum, { nearCm1: 1001, widthCm1: 7, fromCm1: 998, toCm1: 1004 })).toBeNull();
    const dip = { ...spectrum, intensity: spectrum.intensity.map((value) => 200 - value) };
    expect(fitBand(dip, window(1001.4))).toBeNull();
  });
});

describe('a small symmetric system', () => {
  it('is solved, with the diagonal of its inverse', () => {
    const { solution, inverseDiagonal } = solveSymmetric(
      [
        [4, 2],
        [2, 3]
      ],
      [2, 5]
    )!;
    expect(solution[0]).toBeCloseTo(-0.5, 14);
    expect(solution[1]).toBeCloseTo(2, 14);
    expect(inverseDiagonal[0]).toBeCloseTo(3 / 8, 14);
    expect(inverseDiagonal[1]).toBeCloseTo(4 / 8, 14);
  });

  it('is null when singular', () => {
    expect(
      solveSymmetric(
        [
          [1, 1],
          [1, 1]
        ],
        [1, 1]
      )
    ).toBeNull();
    expect(
      solveSymmetric(
        [
          [0, 0],
          [0, 1]
        ],
        [1, 1]
      )
    ).toBeNull();
  });
});

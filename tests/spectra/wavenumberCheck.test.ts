import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { correctShift, fitAxis } from '$lib/spectra/axis/axisFit';
import { instrumentWidth } from '$lib/spectra/axis/resolution';
import { checkWavenumbers } from '$lib/spectra/axis/wavenumberCheck';
import '../support/fixedSeed';
import { lorentzians } from '../support/madeSpectra';

// Positions of ASTM E1840-96(2022) for polystyrene; widths and heights made up.
const POSITIONS = [620.9, 795.8, 1001.4, 1031.8, 1155.3, 1450.5, 1583.1, 1602.3];
const STANDARD = { name: 'polystyrene', bands: POSITIONS.map((shiftCm1) => ({ shiftCm1 })) };
const TOLERANCES = POSITIONS.map((shiftCm1) => ({ shiftCm1, toleranceCm1: 1.5 }));

/** Polystyrene as an instrument would see it that shows a true shift x at x + shift + scale x. */
function seen(error: (cm1: number) => number, noise = 0.2, seed = 1) {
  const bands = POSITIONS.map((x) => ({ centreCm1: x + error(x), height: 60, fwhmCm1: 8 }));
  return lorentzians({ from: 400, to: 1800, step: 1.7 }, bands, { sd: noise, seed });
}

describe('the wavenumber check', () => {
  it('passes an instrument that is right, and says so band by band', () => {
    const check = checkWavenumbers(
      seen(() => 0),
      STANDARD,
      TOLERANCES
    );
    expect(check.pass).toBe(true);
    expect(check.reasons).toEqual([]);
    for (const band of check.bands) {
      expect(band.within).toBe(true);
      expect(Math.abs(band.deviationCm1!)).toBeLessThan(0.15);
    }
  });

  it('fails an instrument off by more than the tolerance and names each band', () => {
    const check = checkWavenumbers(
      seen(() => 2.2),
      STANDARD,
      TOLERANCES
    );
    expect(check.pass).toBe(false);
    expect(check.reasons).toHaveLength(POSITIONS.length);
    expect(check.reasons[0]).toMatch(/620\.9 cm-1 is off by 2\.\d\d cm-1; 1\.5 is allowed/);
  });

  it('judges the deviations as measured: a correctable axis still fails', () => {
    const check = checkWavenumbers(
      seen(() => -3),
      STANDARD,
      TOLERANCES
    );
    expect(check.pass).toBe(false);
    expect(check.axis.rmsCm1).toBeLessThan(0.2);
  });

  it('fits the correction that brings the axis back: corrected = measured + shift + scale x measured', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -4, max: 4, noNaN: true }),
        fc.double({ min: -4e-3, max: 4e-3, noNaN: true }),
        (shift, scale) => {
          const error = (x: number) => shift + scale * (x - 1000);
          const { correction } = checkWavenumbers(seen(error, 0.1), STANDARD, TOLERANCES);
          for (const x of [700, 1000, 1500]) {
            // Where the scale does not stand out of its error it is left out, and up to 0.6 cm-1 may remain.
            expect(Math.abs(correctShift(x + error(x), correction) - x)).toBeLessThan(0.6);
          }
        }
      ),
      { numRuns: 40 }
    );
  });

  it('fits a scale only where it stands out of its error', () => {
    expect(
      checkWavenumbers(
        seen(() => 0.4),
        STANDARD,
        TOLERANCES
      ).axis.form
    ).toBe('shift');
    expect(
      checkWavenumbers(
        seen((x) => 3e-3 * (x - 600)),
        STANDARD,
        TOLERANCES
      ).axis.form
    ).toBe('shift and scale');
  });

  it('sets one odd band aside in the fit, but not in the verdict', () => {
    const check = checkWavenumbers(
      seen((x) => (x === 1155.3 ? 4 : 0.3)),
      STANDARD,
      TOLERANCES
    );
    expect(check.axis.leftOut).toBe(4);
    expect(Math.abs(check.correction.shiftCm1 + 0.3)).toBeLessThan(0.1);
    expect(check.pass).toBe(false);
    expect(check.reasons).toHaveLength(1);
  });

  it('fails when a judged band is not there: a blank, or an axis that stops short', () => {
    const blank = lorentzians({ from: 400, to: 1800, step: 1.7 }, [], { sd: 1, seed: 3 });
    const none = checkWavenumbers(blank, STANDARD, TOLERANCES);
    expect(none.pass).toBe(false);
    expect(none.axis.form).toBe('none');
    expect(none.bands.every((band) => band.foundCm1 === null)).toBe(true);
    const short = seen(() => 0);
    const cut = { shiftCm1: short.shiftCm1.slice(0, 600), intensity: short.intensity.slice(0, 600) };
    const check = checkWavenumbers(cut, STANDARD, TOLERANCES);
    expect(check.reasons.at(-1)).toBe('The band at 1602.3 cm-1 was not found.');
  });

  it('does not judge bands without a tolerance, and refuses to pass on none at all', () => {
    const some = checkWavenumbers(
      seen((x) => (x > 1500 ? 5 : 0)),
      STANDARD,
      TOLERANCES.slice(0, 4)
    );
    expect(some.pass).toBe(true);
    expect(some.bands[7].within).toBeNull();
    const none = checkWavenumbers(
      seen(() => 0),
      STANDARD,
      []
    );
    expect(none.pass).toBe(false);
    expect(none.reasons[0]).toContain('nothing was judged');
  });

  it('fails when the tolerance set names a band the standard does not have', () => {
    const check = checkWavenumbers(
      seen(() => 0),
      STANDARD,
      [...TOLERANCES, { shiftCm1: 2222, toleranceCm1: 1 }]
    );
    expect(check.pass).toBe(false);
    expect(check.reasons[0]).toContain('2222');
  });

  it('a deviation of exactly the tolerance is within it', () => {
    const found = checkWavenumbers(
      seen(() => 1),
      STANDARD,
      TOLERANCES
    ).bands[0];
    const limit = Math.abs(found.deviationCm1!);
    const at = (toleranceCm1: number) =>
      checkWavenumbers(
        seen(() => 1),
        STANDARD,
        [{ shiftCm1: 620.9, toleranceCm1 }]
      ).pass;
    expect(at(limit)).toBe(true);
    expect(at(limit * (1 - 1e-12))).toBe(false);
  });

  it('is the same JSON, byte for byte, every time', () => {
    const run = () =>
      JSON.stringify(
        checkWavenumbers(
          seen(() => 0.5),
          STANDARD,
          TOLERANCES
        )
      );
    expect(run()).toBe(run());
  });
});

describe('the axis fit', () => {
  it('weighs bands by their certainty', () => {
    const fit = fitAxis([
      { expectedCm1: 1000, foundCm1: 1001, errorCm1: 0.1 },
      { expectedCm1: 1100, foundCm1: 1104, errorCm1: 10 }
    ]);
    expect(fit.correction.shiftCm1).toBeCloseTo(-1, 3);
    expect(fit.form).toBe('shift');
  });

  it('of nothing corrects nothing', () => {
    expect(fitAxis([]).correction).toEqual({ shiftCm1: 0, scale: 0 });
  });
});

describe('the instrument width behind a measured one', () => {
  it('undoes the Voigt width of Olivero & Longbothum (1977)', () => {
    for (const [lorentz, gauss] of [
      [1.36, 4],
      [1.36, 12],
      [5, 1]
    ]) {
      const voigt = 0.5346 * lorentz + Math.sqrt(0.2166 * lorentz ** 2 + gauss ** 2);
      expect(instrumentWidth(voigt, lorentz)).toBeCloseTo(gauss, 10);
    }
  });

  it('is zero for a band no wider than its nature', () => {
    expect(instrumentWidth(1.2, 1.36)).toBe(0);
  });
});

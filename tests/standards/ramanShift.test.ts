import { expect, test } from 'vitest';
import { shiftFromWavelength, wavelengthFromShift } from '$lib/spectra/axis/units';

/** Computed from the definition, shift = 1e7/L0 - 1e7/L (CODATA constants play no part); Tuschel, Spectroscopy 34(12):8, 2019, for the convention. */
const STOKES: readonly (readonly [
  laserNm: number,
  shiftCm1: number,
  stokesNm: number,
  antiStokesNm: number
])[] = [
  [532, 1000, 561.8927, 505.1272],
  [633, 1000, 675.7767, 595.3165],
  [785, 1000, 851.8719, 727.8628],
  [830, 1000, 905.1254, 766.3897],
  [1064, 1000, 1190.6893, 961.6775]
];

test.each(STOKES)(
  '%d nm: %d cm-1 stands at %d nm, its anti-Stokes twin at %d nm',
  (laser, shift, stokes, antiStokes) => {
    expect(wavelengthFromShift(laser, shift)).toBeCloseTo(stokes, 4);
    expect(wavelengthFromShift(laser, -shift)).toBeCloseTo(antiStokes, 4);
    expect(shiftFromWavelength(laser, stokes)).toBeCloseTo(shift, 2);
    expect(shiftFromWavelength(laser, antiStokes)).toBeCloseTo(-shift, 2);
  }
);

test('785 nm excitation and light at 850 nm are 974.1476 cm-1 apart', () => {
  expect(shiftFromWavelength(785, 850)).toBeCloseTo(974.1476, 4);
});

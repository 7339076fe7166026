import { describe, expect, it } from 'vitest';
import { decide, type DecideRequest } from '$lib/identity/decide';
import type { Decision, GateCode } from '$lib/identity/decision';
import { linerSpectrum } from '$lib/identity/liner';
import { seededRandom } from '$lib/spectra/statistics/seededRandom';
import type { Spectrum } from '$lib/spectra/spectrum';
import { stepSpec } from '$lib/spectra/preprocess/steps';
import { readLiner } from '../../scripts/demo/materials';
import { synthesise } from '../../scripts/demo/synthesise';
import { asFile, INSTRUMENT, libraryOf, madeMethod, madeScan, requestFor } from '../support/madeMethods';

const PAR = madeMethod('PAR');
const LIBRARY = libraryOf([PAR.entry, madeMethod('CAF').entry]);

const decideBytes = (bytes: Uint8Array, more: Partial<DecideRequest> = {}): Decision =>
  decide(requestFor(PAR, LIBRARY, bytes, more));
const decideSpectrum = (spectrum: Spectrum, more: Partial<DecideRequest> = {}): Decision =>
  decideBytes(asFile(spectrum), more);

/** The measurement gives no result, this gate says why, and the person is told what to do. */
function expectGate(decision: Decision, code: GateCode): void {
  expect([decision.verdict, decision.explanation.decidedBy]).toEqual(['invalid', code]);
  const gate = decision.gates.find((entry) => entry.code === code);
  expect(gate?.met).toBe(false);
  expect(gate?.message?.length).toBeGreaterThan(20);
  expect(decision.scores).toBeNull();
  expect(decision.criteria).toEqual([]);
  expect(decision.explanation.reason.length).toBeGreaterThan(10);
  expect(decision.explanation.advice.length).toBeGreaterThan(10);
}

const withIntensity = ({ shiftCm1 }: Spectrum, intensity: (i: number) => number): Spectrum => ({
  shiftCm1,
  intensity: Float64Array.from(shiftCm1, (_, i) => intensity(i))
});
const GOOD = madeScan('PAR');

describe('a measurement that cannot be judged gives no verdict on the material', () => {
  it('a good scan meets every gate', () => {
    const decision = decideSpectrum(GOOD);
    expect(decision.gates.filter((gate) => !gate.met)).toEqual([]);
    expect(decision.verdict).toBe('pass');
  });

  it('unreadable: bytes that are no spectrum', () => {
    expectGate(decideBytes(new Uint8Array(0)), 'unreadable');
    expectGate(decideBytes(new TextEncoder().encode('a delivery note, two pages')), 'unreadable');
    expectGate(decideBytes(Uint8Array.from({ length: 400 }, (_, i) => (i * 37) % 256)), 'unreadable');
  });

  it('wrong-excitation: the file says another laser', () => {
    const text = new TextDecoder().decode(asFile(GOOD)).replace('785 nm', '532 nm');
    const decision = decideBytes(new TextEncoder().encode(text));
    expectGate(decision, 'wrong-excitation');
    expect(decision.explanation.detail).toContain('532 nm');
  });

  it('wrong-excitation: the instrument is of another laser, whatever the file says', () => {
    expectGate(decideSpectrum(GOOD, { instrument: { excitationNm: 1064 } }), 'wrong-excitation');
  });

  it('the laser may differ by the tolerance and not by more', () => {
    expect(decideSpectrum(GOOD, { instrument: { excitationNm: 786 } }).verdict).toBe('pass');
    expectGate(decideSpectrum(GOOD, { instrument: { excitationNm: 786.01 } }), 'wrong-excitation');
  });

  it('check-missing and check-expired: an instrument without a valid performance check', () => {
    expectGate(decideSpectrum(GOOD, { check: { state: 'missing', correction: null } }), 'check-missing');
    expectGate(decideSpectrum(GOOD, { check: { state: 'expired', correction: null } }), 'check-expired');
  });

  it('axis-too-short: the spectrum ends before the method does, at either end', () => {
    const cut = (from: number, to: number): Spectrum => ({
      shiftCm1: GOOD.shiftCm1.slice(from, to),
      intensity: GOOD.intensity.slice(from, to)
    });
    const points = GOOD.shiftCm1.length;
    expectGate(decideSpectrum(cut(0, points - 300)), 'axis-too-short');
    expectGate(decideSpectrum(cut(150, points)), 'axis-too-short');
  });

  it('step-too-coarse: points too far apart for bands', () => {
    const every = (values: Float64Array) => values.filter((_, i) => i % 4 === 0 || i === values.length - 1);
    expectGate(
      decideSpectrum({ shiftCm1: every(GOOD.shiftCm1), intensity: every(GOOD.intensity) }),
      'step-too-coarse'
    );
  });

  it('saturated: bands cut off flat at the ceiling', () => {
    expectGate(decideSpectrum(madeScan('PAR', { brightness: 90_000 })), 'saturated');
  });

  it('no-signal: noise alone, whatever its seed', () => {
    for (let seed = 1; seed <= 40; seed++) {
      const random = seededRandom(seed);
      const noise = withIntensity(GOOD, () => 500 + 40 * (random() + random() + random() + random() - 2));
      expectGate(decideSpectrum(noise), 'no-signal');
    }
  });

  it('no-signal: a flat line and a straight slope', () => {
    expectGate(decideSpectrum(withIntensity(GOOD, () => 250)), 'no-signal');
    expectGate(decideSpectrum(withIntensity(GOOD, () => 0)), 'no-signal');
  });

  it('low-signal: bands are there but too faint', () => {
    expectGate(decideSpectrum(madeScan('PAR', { brightness: 260 })), 'low-signal');
  });

  it('fluorescence: bands drowned in a background hundreds of times their height', () => {
    const swamp = madeScan('PAR', { brightness: 60_000, fluorescence: 0, ceiling: 1e9 });
    const drowned = withIntensity(swamp, (i) => swamp.intensity[i] + 4e7 - 1e4 * i);
    expectGate(decideSpectrum(drowned), 'fluorescence');
  });

  it('spikes: more of them than can be mended, while a few are mended and pass', () => {
    expectGate(decideSpectrum(madeScan('PAR', { spikes: 60 })), 'spikes');
    const mended = decideSpectrum(madeScan('PAR', { spikes: 4 }));
    expect(mended.gates.filter((gate) => !gate.met)).toEqual([]);
    expect(mended.verdict).toBe('pass');
  });

  it('liner-only: the probe saw the liner and nothing else', () => {
    const bare = synthesise(readLiner(), INSTRUMENT, { lotSeed: 'liner', scanSeed: 'liner', linerShare: 0 });
    expectGate(decideSpectrum(bare), 'liner-only');
    const drawn = linerSpectrum({ fromCm1: 180, toCm1: 2050, stepCm1: 1.5 });
    expectGate(decideSpectrum(withIntensity(drawn, (i) => 100 + 9000 * drawn.intensity[i])), 'liner-only');
  });

  it('not-treatable: the recipe cannot treat the spectrum', () => {
    // A filter before the grid needs even steps, and the scan's are even in wavelength instead.
    const { definition } = PAR.method;
    const smoothing = stepSpec('savitzky-golay', { derivative: 0 });
    const method = {
      ...PAR.method,
      definition: { ...definition, recipe: [smoothing, ...definition.recipe] }
    };
    expectGate(
      decide(requestFor({ ...PAR, method, methodSha256: 'filter first' }, LIBRARY, asFile(GOOD))),
      'not-treatable'
    );
  });

  it('the material under the liner is no bare liner: a fifth of the light may be liner', () => {
    const decision = decideSpectrum(madeScan('PAR', { linerShare: 0.2 }));
    expect(decision.explanation.decidedBy).not.toBe('liner-only');
  });
});

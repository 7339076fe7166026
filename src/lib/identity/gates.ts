import { findSaturation } from '../spectra/peaks/saturation';
import { signalToNoise, type SignalToNoise } from '../spectra/peaks/noise';
import { applySteps } from '../spectra/preprocess/steps';
import type { ReadSpectrum } from '../spectra/formats/format';
import type { Spectrum } from '../spectra/spectrum';
import type { QualityGate } from './decision';
import type { PreparedMethod } from './prepared';

/** Below this ratio there is nothing but noise: a spectrum of noise alone reads about 2. */
const NO_SIGNAL = 4;
/** A step coarser than this loses whole bands, cm-1. */
const COARSEST_STEP_CM1 = 6;
/** Strongest band below this fraction of the background: fluorescence hides the rest. */
const SWAMPED = 0.004;
/** More spiked points than this fraction cannot be mended. */
const MOST_SPIKED = 0.02;

export interface GateInputs {
  readonly read: ReadSpectrum;
  /** After axis correction. */
  readonly scan: Spectrum;
  readonly method: PreparedMethod;
  readonly instrumentNm: number;
  readonly check: 'valid' | 'missing' | 'expired';
}

/** Gates that need no treatment: laser, check, axis, step, saturation. */
export function firstGates(inputs: GateInputs): QualityGate[] {
  const { scan, method } = inputs;
  const { shiftCm1 } = scan;
  const { fromCm1, toCm1 } = method.range;
  const first = shiftCm1[0];
  const last = shiftCm1[shiftCm1.length - 1];
  const step = (last - first) / (shiftCm1.length - 1);
  return [
    laserGate(inputs),
    checkGate(inputs.check),
    gate('axis-too-short', first <= fromCm1 && last >= toCm1, {
      message: `The spectrum covers ${first.toFixed(0)} to ${last.toFixed(0)} cm-1, but the method needs ${fromCm1} to ${toCm1}. Measure with the full range.`
    }),
    gate('step-too-coarse', step <= COARSEST_STEP_CM1, {
      value: step,
      limit: COARSEST_STEP_CM1,
      message: `The points are ${step.toFixed(1)} cm-1 apart, too coarse for bands. Measure with a finer step.`
    }),
    gate('saturated', !saturatedInRange(scan, fromCm1, toCm1), {
      message:
        'The detector was at its ceiling: the tops of bands are cut off flat. Use a shorter integration time or less power.'
    })
  ];
}

/** Gates on signal, once the axis is known to fit. */
export function signalGates(
  scan: Spectrum,
  method: PreparedMethod
): { gates: QualityGate[]; signal: SignalToNoise } {
  const { fromCm1, toCm1 } = method.range;
  const raw = within(scan, fromCm1, toCm1);
  const shown = applySteps(scan, method.display.recipe);
  const corrected = signalToNoise(shown.intensity, raw);
  // A noiseless file has no noise to divide by, yet bands of height zero must not count as signal.
  const signal = { ...corrected, ratio: corrected.signal > 0 ? corrected.ratio : 0 };
  const { minSignalToNoise } = method.fitted.definition.criteria;
  const background = median(raw);
  const gates = [
    gate('no-signal', signal.ratio >= NO_SIGNAL, {
      value: signal.ratio,
      limit: NO_SIGNAL,
      message:
        'There is no Raman signal. Check that the probe touches the liner over the material and that the laser is on.'
    }),
    gate('low-signal', signal.ratio >= minSignalToNoise, {
      value: signal.ratio,
      limit: minSignalToNoise,
      message:
        'The signal is too weak against its noise. Wipe the window, press the probe firmly, measure longer.'
    }),
    gate('fluorescence', background <= 0 || signal.signal >= SWAMPED * background, {
      message:
        'Fluorescence swamps the bands. Measure longer, or use the instrument with the longer wavelength.'
    }),
    gate('spikes', spikedFraction(scan, method) <= MOST_SPIKED, {
      message: 'There are too many spikes to mend. Measure again.'
    })
  ];
  return { gates, signal };
}

function gate(
  code: QualityGate['code'],
  met: boolean,
  more: { value?: number; limit?: number; message: string }
): QualityGate {
  const numbers = more.value === undefined ? {} : { value: more.value, limit: more.limit };
  return met ? { code, met, ...numbers } : { code, met, ...numbers, message: more.message };
}

function laserGate({ read, method, instrumentNm }: GateInputs): QualityGate {
  const { excitationNm, excitationToleranceNm } = method.fitted.definition;
  const stated = read.acquisition.excitationNm;
  const wrong = [instrumentNm, ...(stated === undefined ? [] : [stated])].find(
    (nm) => Math.abs(nm - excitationNm) > excitationToleranceNm
  );
  return gate('wrong-excitation', wrong === undefined, {
    message: `The scan was made with ${wrong} nm, but the method is for ${excitationNm} nm. Use an instrument of that wavelength.`
  });
}

function checkGate(check: GateInputs['check']): QualityGate {
  if (check === 'expired') {
    return {
      code: 'check-expired',
      met: false,
      message: "The instrument's performance check is out of date. Run the check, then scan again."
    };
  }
  return gate('check-missing', check === 'valid', {
    message: 'The instrument has no passed performance check. Run the check, then scan again.'
  });
}

function saturatedInRange({ shiftCm1, intensity }: Spectrum, fromCm1: number, toCm1: number): boolean {
  const found = findSaturation(intensity);
  if (!found.saturated || found.run === null) return false;
  return shiftCm1[found.run.last] >= fromCm1 && shiftCm1[found.run.first] <= toCm1;
}

function within({ shiftCm1, intensity }: Spectrum, fromCm1: number, toCm1: number): Float64Array {
  return intensity.filter((_, i) => shiftCm1[i] >= fromCm1 && shiftCm1[i] <= toCm1);
}

function median(values: Float64Array): number {
  const sorted = values.slice().sort();
  return sorted.length === 0 ? 0 : sorted[sorted.length >> 1];
}

function spikedFraction(scan: Spectrum, method: PreparedMethod): number {
  const despike = method.fitted.definition.recipe.find((step) => step.name === 'despike');
  if (!despike) return 0;
  const mended = applySteps(scan, [despike]).intensity;
  let changed = 0;
  for (let i = 0; i < mended.length; i++) if (mended[i] !== scan.intensity[i]) changed++;
  return changed / mended.length;
}

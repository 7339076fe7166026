/**
 * Makes the demo's spectra from published band positions (reference/materials). Invented data, and every file made
 * from it says so.
 *
 * A spectrum is: bands (pseudo-Voigt: the material's Lorentzian widened by the instrument's Gaussian, mixed by
 * Thompson, Cox & Hastings, J. Appl. Cryst. 20:79, 1987), each band's height varied a little by lot and a little by
 * scan; liner bands in proportion; fluorescence as a falling curve with a slow bend; then shot noise (variance equal
 * to the counts), read-out noise, whole counts, the detector's ceiling. The axis is even in wavelength, as a grating
 * gives it, and off by the instrument's own shift and scale. The same seed gives the same counts.
 */
import { seededRandom, type RandomSource } from '../../src/lib/spectra/statistics/seededRandom';
import { shiftFromWavelength, wavelengthFromShift } from '../../src/lib/spectra/axis/units';

export interface DemoBand {
  readonly shiftCm1: number;
  readonly relativeHeight: number;
  readonly fwhmCm1: number;
}

export interface DemoInstrument {
  readonly name: string;
  readonly serial: string;
  readonly excitationNm: number;
  readonly fromCm1: number;
  readonly toCm1: number;
  readonly points: number;
  readonly resolutionCm1: number;
  /** The axis reads true shift + shiftCm1 + scale x true shift. */
  readonly shiftCm1: number;
  readonly scale: number;
  readonly readNoise: number;
  /** How strongly samples fluoresce at its excitation, next to 785 nm; 1 when absent. */
  readonly fluorescenceFactor?: number;
}

export interface SynthesisOptions {
  /** Seeds of what the lot and what the scan vary. */
  readonly lotSeed: string;
  readonly scanSeed: string;
  /** Counts of the strongest band. */
  readonly brightness?: number;
  /** Fluorescence at the low end, in units of the strongest band. */
  readonly fluorescence?: number;
  /** Share of the light that comes from the liner, 0 to 1. */
  readonly linerShare?: number;
  readonly liner?: readonly DemoBand[];
  readonly spikes?: number;
  readonly ceiling?: number;
}

export interface DemoSpectrum {
  readonly shiftCm1: Float64Array;
  readonly intensity: Float64Array;
}

/** A seed number from text (FNV-1a, 32 bits). */
export function seedOf(text: string): number {
  let hash = 0x811c9dc5;
  for (let i = 0; i < text.length; i++) hash = Math.imul(hash ^ text.charCodeAt(i), 0x01000193);
  return hash >>> 0;
}

/** Standard normal from twelve uniforms: no transcendental function, so the same everywhere. */
function normal(random: RandomSource): number {
  let sum = -6;
  for (let i = 0; i < 12; i++) sum += random();
  return sum;
}

/** The spectrum an instrument would give of a material. */
export function synthesise(
  bands: readonly DemoBand[],
  instrument: DemoInstrument,
  options: SynthesisOptions
): DemoSpectrum {
  const lot = seededRandom(seedOf(`lot ${options.lotSeed}`));
  const scan = seededRandom(seedOf(`scan ${options.scanSeed}`));
  const {
    brightness = 20_000,
    fluorescence = 0.4,
    linerShare = 0.02,
    liner = [],
    spikes = 0,
    ceiling = 65_535
  } = options;
  const own = bands.map((band) => varied(band, lot, scan, 1 - linerShare));
  const around = liner.map((band) => varied(band, lot, scan, linerShare));
  const truth = trueAxis(instrument);
  const fluorescing = fluorescence * (instrument.fluorescenceFactor ?? 1);
  const level = fluorescing * (0.8 + 0.4 * lot()) * (0.9 + 0.2 * scan());
  const bend = 0.15 * (lot() - 0.5);
  const intensity = truth.map((x) => {
    const u = (x - instrument.fromCm1) / (instrument.toCm1 - instrument.fromCm1);
    const background = level * (1 - 0.75 * u + bend * u * (1 - u) * 4);
    const counts =
      brightness *
      (bandsAt(own, x, instrument) + bandsAt(around, x, instrument) + Math.max(0.02, background));
    const noisy = counts + Math.sqrt(counts) * normal(scan) + instrument.readNoise * normal(scan);
    return Math.min(ceiling, Math.max(0, Math.round(noisy)));
  });
  for (let k = 0; k < spikes; k++) {
    const at = Math.floor(scan() * intensity.length);
    intensity[at] = Math.min(ceiling, intensity[at] + Math.round(brightness * (0.5 + scan())));
  }
  return { shiftCm1: truth.map((x) => x * (1 + instrument.scale) + instrument.shiftCm1), intensity };
}

function varied(band: DemoBand, lot: RandomSource, scan: RandomSource, share: number): DemoBand {
  const height = band.relativeHeight * (1 + 0.05 * normal(lot)) * (1 + 0.012 * normal(scan)) * share;
  return { ...band, relativeHeight: Math.max(0, height), shiftCm1: band.shiftCm1 + 0.12 * normal(lot) };
}

/** Even steps in wavelength over the instrument's range, as Raman shift. */
function trueAxis(instrument: DemoInstrument): Float64Array {
  const from = wavelengthFromShift(instrument.excitationNm, instrument.fromCm1);
  const to = wavelengthFromShift(instrument.excitationNm, instrument.toCm1);
  const axis = new Float64Array(instrument.points);
  for (let i = 0; i < axis.length; i++) {
    axis[i] = shiftFromWavelength(instrument.excitationNm, from + ((to - from) * i) / (axis.length - 1));
  }
  return axis;
}

/** Sum of the bands at a shift, each a pseudo-Voigt of the natural and the instrument's width. */
export function bandsAt(bands: readonly DemoBand[], x: number, instrument: DemoInstrument): number {
  let sum = 0;
  for (const band of bands) {
    const lorentz = band.fwhmCm1;
    const total = 0.5346 * lorentz + Math.sqrt(0.2166 * lorentz * lorentz + instrument.resolutionCm1 ** 2);
    const ratio = lorentz / total;
    const mix = ratio * (1.36603 - ratio * (0.47719 - 0.11116 * ratio));
    const u = (2 * (x - band.shiftCm1)) / total;
    if (Math.abs(u) > 120) continue;
    const height = (band.relativeHeight * lorentz) / total;
    sum += height * (mix / (1 + u * u) + (1 - mix) * Math.exp(-0.6931471805599453 * u * u));
  }
  return sum;
}

const MARK = 'DEMO: invented data, synthesised from published band positions';

/** How a spectrum was measured: frames of a time each, added up. */
export interface DemoExposure {
  readonly integrationTimeMs: number;
  readonly accumulations: number;
}

const ONE_FRAME: DemoExposure = { integrationTimeMs: 2000, accumulations: 1 };

/** The spectrum as comma-delimited text with metadata lines. */
export function toDelimitedText(
  spectrum: DemoSpectrum,
  instrument: DemoInstrument,
  title: string,
  exposure: DemoExposure = ONE_FRAME
): string {
  const lines = [
    `# ${MARK}`,
    `# Title: ${title}`,
    `# Laser wavelength: ${instrument.excitationNm} nm`,
    `# Serial number: ${instrument.serial}`,
    `# Integration time (ms): ${exposure.integrationTimeMs}`,
    `# Accumulations: ${exposure.accumulations}`,
    'Raman shift (cm-1),Intensity'
  ];
  spectrum.shiftCm1.forEach((x, i) => lines.push(`${x.toFixed(3)},${spectrum.intensity[i]}`));
  return `${lines.join('\n')}\n`;
}

/** The spectrum as JCAMP-DX 5.01 points: its axis is uneven, so XYPOINTS and not XYDATA. */
export function toJcampDx(spectrum: DemoSpectrum, instrument: DemoInstrument, title: string): string {
  const { shiftCm1: x, intensity: y } = spectrum;
  const points = Array.from(x, (shift, i) => `${shift.toFixed(3)}, ${y[i]}`);
  return [
    `##TITLE= ${title} (${MARK})`,
    '##JCAMP-DX= 5.01',
    '##DATA TYPE= RAMAN SPECTRUM',
    '##ORIGIN= DEMO',
    '##OWNER= DEMO',
    `##SPECTROMETER/DATA SYSTEM= DEMO ${instrument.name}`,
    `##RESOLUTION= ${instrument.resolutionCm1}`,
    `##$LASER WAVELENGTH= ${instrument.excitationNm} nm`,
    `##$SERIAL NUMBER= ${instrument.serial}`,
    `##$INTEGRATION TIME= ${ONE_FRAME.integrationTimeMs} ms`,
    `##$ACCUMULATIONS= ${ONE_FRAME.accumulations}`,
    '##XUNITS= 1/CM',
    '##YUNITS= COUNTS',
    '##XFACTOR= 1',
    '##YFACTOR= 1',
    `##FIRSTX= ${x[0].toFixed(3)}`,
    `##LASTX= ${x[x.length - 1].toFixed(3)}`,
    `##FIRSTY= ${y[0]}`,
    `##NPOINTS= ${x.length}`,
    '##XYPOINTS= (XY..XY)',
    ...points,
    '##END=',
    ''
  ].join('\r\n');
}

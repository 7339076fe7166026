import { bandsAt, type DemoBand, type DemoInstrument } from './synthesise';

/**
 * The `brightness` at which a material's strongest band stands `ratio` times above the noise at its top.
 *
 * The signal there is S = b * h, with h the height that the instrument's resolution leaves of the band; the noise is
 * shot noise of band and background and the read-out noise: N^2 = b * (h + background) + readNoise^2. So b solves
 * h^2 b^2 - ratio^2 (h + background) b - ratio^2 readNoise^2 = 0. What lot and scan vary is not in it.
 *
 * @param background fluorescence at the band, in units of the strongest band
 */
export function brightnessForSnr(
  ratio: number,
  bands: readonly DemoBand[],
  instrument: DemoInstrument,
  background: number
): number {
  const height = visibleHeight(bands, instrument);
  const square = ratio * ratio;
  const shot = square * (height + background);
  const read = square * instrument.readNoise * instrument.readNoise;
  return (shot + Math.sqrt(shot * shot + 4 * height * height * read)) / (2 * height * height);
}

/** Height of the highest band within the instrument's range, as the instrument shows it. */
function visibleHeight(bands: readonly DemoBand[], instrument: DemoInstrument): number {
  const tops = bands
    .filter((band) => band.shiftCm1 >= instrument.fromCm1 && band.shiftCm1 <= instrument.toCm1)
    .map((band) => bandsAt(bands, band.shiftCm1, instrument));
  if (tops.length === 0) throw new Error('no band lies within the range of the instrument');
  return Math.max(...tops);
}

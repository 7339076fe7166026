import { seededRandom } from '$lib/spectra/statistics/seededRandom';
import type { Spectrum } from '$lib/spectra/spectrum';

/** Normal variates from a seed (Box & Muller), for made spectra. */
export function seededNormal(seed: number): () => number {
  const random = seededRandom(seed);
  return () => Math.sqrt(-2 * Math.log(1 - random())) * Math.cos(2 * Math.PI * random());
}

export interface MadeBand {
  readonly centreCm1: number;
  readonly height: number;
  readonly fwhmCm1: number;
}

/** A sum of Lorentzian bands on a uniform axis, with point-to-point noise where asked for. */
export function lorentzians(
  axis: { readonly from: number; readonly to: number; readonly step: number },
  bands: readonly MadeBand[],
  noise: { readonly sd: number; readonly seed: number } = { sd: 0, seed: 1 }
): Spectrum {
  const points = Math.floor((axis.to - axis.from) / axis.step + 1e-9) + 1;
  const normal = seededNormal(noise.seed);
  const shiftCm1 = Float64Array.from({ length: points }, (_, i) => axis.from + i * axis.step);
  const intensity = shiftCm1.map((x) =>
    bands.reduce(
      (sum, band) => sum + band.height / (1 + ((2 * (x - band.centreCm1)) / band.fwhmCm1) ** 2),
      noise.sd * normal()
    )
  );
  return { shiftCm1, intensity };
}

/**
 * Spectra of one made material: a mean, a few smooth directions of variation of falling size, and noise.
 * Rows of equal length; the same seed gives the same set.
 */
export function madeClass(options: {
  readonly count: number;
  readonly points: number;
  readonly factors: readonly number[];
  readonly noise: number;
  readonly seed: number;
  /** Seed of the directions, so that two sets can be of the same kind. */
  readonly kind?: number;
}): Float64Array[] {
  const { count, points, factors, noise } = options;
  const kind = seededNormal(options.kind ?? 7);
  const directions = factors.map(() => {
    const raw = Float64Array.from({ length: points }, () => kind());
    const smooth = raw.map((_, j) => {
      let sum = 0;
      for (let d = -6; d <= 6; d++) sum += raw[Math.min(points - 1, Math.max(0, j + d))];
      return sum;
    });
    const length = Math.hypot(...smooth);
    return smooth.map((value) => value / length);
  });
  const normal = seededNormal(options.seed);
  return Array.from({ length: count }, () => {
    const row = Float64Array.from({ length: points }, (_, j) => 5 + Math.sin(j / 9) + noise * normal());
    factors.forEach((size, k) => {
      const score = size * normal();
      for (let j = 0; j < points; j++) row[j] += score * directions[k][j];
    });
    return row;
  });
}

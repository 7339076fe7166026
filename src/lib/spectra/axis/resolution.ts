export interface Resolution {
  /** Band it was read from, cm-1. */
  readonly atCm1: number;
  /** Width at half height as measured, cm-1. */
  readonly fwhmCm1: number;
  /** The instrument's own share of it, where the band's natural width is known, cm-1. */
  readonly instrumentFwhmCm1: number | null;
}

/**
 * The instrument's (Gaussian) width behind a measured band of known natural (Lorentzian) width, from the Voigt
 * approximation of Olivero & Longbothum (J. Quant. Spectrosc. Radiat. Transfer 17:233, 1977):
 * fV = 0.5346 fL + sqrt(0.2166 fL^2 + fG^2), good to 0.02 %.
 * @returns 0 when the band is no wider than its natural width
 */
export function instrumentWidth(measuredFwhmCm1: number, naturalFwhmCm1: number): number {
  const rest = measuredFwhmCm1 - 0.5346 * naturalFwhmCm1;
  const square = rest * rest - 0.2166 * naturalFwhmCm1 * naturalFwhmCm1;
  return rest > 0 && square > 0 ? Math.sqrt(square) : 0;
}

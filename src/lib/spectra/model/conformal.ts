/**
 * Conformal p-value of a new spectrum: the share of held-out genuine references, the new one counted among
 * them, that are at least as strange as it: p = (1 + #{a_i >= a}) / (n + 1) (Vovk, Gammerman & Shafer,
 * Algorithmic Learning in a Random World, 2005). If the new spectrum is of the same kind as the references, p
 * is at most e with chance at most e, whatever their distribution; n references cannot give a p below
 * 1/(n + 1). With scores from leave-one-out refits rather than a set kept apart, the guarantee is close, not
 * exact.
 *
 * @param heldOut nonconformity scores of the references, ascending
 * @param score nonconformity of the new spectrum, same measure
 */
export function conformalP(heldOut: ArrayLike<number>, score: number): number {
  let low = 0;
  let high = heldOut.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (heldOut[middle] >= score) high = middle;
    else low = middle + 1;
  }
  return (1 + heldOut.length - low) / (heldOut.length + 1);
}

/**
 * How strange a spectrum is to a class model: the larger of its two distances, each in units of its limit.
 * Above 1 it is outside one limit or the other.
 */
export function nonconformity(
  t2: number,
  q: number,
  limits: { readonly t2: number; readonly q: number }
): number {
  const score = limits.t2 > 0 ? t2 / limits.t2 : 0;
  const residual = limits.q > 0 ? q / limits.q : 0;
  return Math.max(score, residual);
}

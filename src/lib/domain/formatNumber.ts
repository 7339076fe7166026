/** A number with U+2212 for a minus sign, and none before zero. */
const signed = (text: string) => (/^-0(\.0*)?$/.test(text) ? text.slice(1) : text.replace('-', '\u2212'));

/** Digits after the point: `decimals` for sizes from 0.001 to 10, else as many as show `decimals` digits in all. */
function placesFor(size: number, decimals: number): number {
  if (size === 0 || !Number.isFinite(size) || (size < 10 && size >= 0.001)) return decimals;
  return Math.min(16, Math.max(0, decimals - Math.floor(Math.log10(size)) - 1));
}

/**
 * A value and its limit as text, so that the display never contradicts the verdict: unequal numbers print unequal,
 * with more digits where they need them. Between 0.001 and 10 both have `decimals` places; larger and smaller ones
 * as many as show four significant digits of the larger of the two.
 */
export function formatAgainstLimit(
  value: number,
  limit: number,
  decimals = 4
): { value: string; limit: string } {
  const places = placesFor(Math.max(Math.abs(value), Math.abs(limit)), decimals);
  for (let digits = places; digits < 17; digits++) {
    const shown = { value: signed(value.toFixed(digits)), limit: signed(limit.toFixed(digits)) };
    if (shown.value !== shown.limit || value === limit) return shown;
  }
  return { value: signed(String(value)), limit: signed(String(limit)) };
}

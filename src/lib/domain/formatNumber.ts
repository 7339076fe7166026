/** A number with U+2212 for a minus sign. */
const signed = (text: string) => text.replace('-', '\u2212');

/**
 * A value and its limit as text, so that the display never contradicts the verdict: unequal numbers print unequal,
 * with more digits where they need them. Large and small magnitudes are printed to four significant digits.
 */
export function formatAgainstLimit(value: number, limit: number, decimals = 4): { value: string; limit: string } {
  const size = Math.max(Math.abs(value), Math.abs(limit));
  const places = size >= 10 ? Math.max(0, decimals - Math.floor(Math.log10(size)) - 1) : decimals;
  for (let digits = places; digits < 17; digits++) {
    const shown = { value: signed(value.toFixed(digits)), limit: signed(limit.toFixed(digits)) };
    if (shown.value !== shown.limit || value === limit) return shown;
  }
  return { value: signed(String(value)), limit: signed(String(limit)) };
}

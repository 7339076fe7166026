/** A number with U+2212 for a minus sign. */
const minus = (text: string) => text.replace('-', '\u2212');

/** A Raman shift at the cursor: one decimal. */
export const shiftText = (shiftCm1: number): string => minus(shiftCm1.toFixed(1));

/** An intensity in four significant digits; counts above 9,999 in groups of three, set apart by thin spaces. */
export function intensityText(value: number): string {
  const size = Math.abs(value);
  if (size >= 10_000) return minus(String(Math.round(value)).replace(/\B(?=(\d{3})+$)/g, '\u2009'));
  if (size >= 1000) return minus(value.toFixed(0));
  if (size >= 0.001 || size === 0) return minus(value.toFixed(4));
  return minus(value.toPrecision(3));
}

/** A figure on the intensity axis: as short as it is exact. */
export const tickText = (value: number): string =>
  Math.abs(value) >= 10_000 ? intensityText(value) : minus(String(Number(value.toPrecision(6))));

/** A difference, always with its sign. */
export const signedText = (value: number): string => (value > 0 ? '+' : '') + intensityText(value);

import type { Figures, Rate } from './figures';

const percent = (value: number): string => `${(100 * value).toFixed(1)} %`;

function line(name: string, { count, of, rate, low, high }: Rate): string {
  if (rate === null || low === null || high === null) return `${name.padEnd(34)} not measured`;
  return `${name.padEnd(34)} ${percent(rate).padStart(8)}   ${count} of ${of}   95 % bounds ${percent(low)} to ${percent(high)}`;
}

/** The figures as a table for a terminal. */
export function reportOf(title: string, figures: Figures): string {
  const counts = (entries: readonly (readonly [string, number])[]) =>
    entries.map(([name, count]) => `    ${count} x ${name}`);
  const { equalErrorRate } = figures;
  return [
    title,
    line('Sensitivity (genuine pass)', figures.sensitivity),
    line('  genuine, failed', figures.falseRejects),
    line('  genuine, inconclusive', figures.genuineInconclusive),
    line('  genuine, no valid measurement', figures.genuineInvalid),
    ...counts(Object.entries(figures.refusedBy).sort((a, b) => b[1] - a[1])),
    line('Specificity (others do not pass)', figures.specificity),
    ...figures.falseAccepts.map((text) => `    passed: ${text}`),
    line('Best match by correlation', figures.bestMatch),
    ...counts(figures.confused.map(({ pair, count }) => [pair, count] as const)),
    `${'Equal error rate of correlation'.padEnd(34)} ${(equalErrorRate === null ? 'not measured' : percent(equalErrorRate)).padStart(8)}`,
    `${'Time for a decision, median'.padEnd(34)} ${figures.medianMs.toFixed(2).padStart(8)} ms`
  ].join('\n');
}

import type { Figures, Rate } from './figures';

/** Figures as lines of text; every rate with its count and exact 95 % interval. */
export function reportLines(figures: Figures): string[] {
  const lines = [
    `${figures.spectra} spectra, ${figures.materials} materials`,
    row('own material passed', figures.passedOwn),
    row('  of those with a result', figures.passedOwnOfJudged),
    row('own material failed', figures.failedOwn),
    row('other material refused', figures.refusedOther),
    row('own is best of all methods', figures.bestMatch),
    row('  counting no result against', figures.bestMatchOfAll),
    row('no other ahead under own method', figures.ownAhead),
    `${'equal error rate'.padEnd(32)} ${percent(figures.equalErrorByLead)} by lead, ${percent(figures.equalErrorByCorrelation)} by correlation alone`,
    `${'time per decision'.padEnd(32)} ${figures.medianMilliseconds.toFixed(2)} ms (median)`
  ];
  const gates = Object.entries(figures.noResult).map(([gate, count]) => `${gate} ${count}`);
  if (gates.length > 0) lines.push(`${'no result'.padEnd(32)} ${gates.join(', ')}`);
  for (const trial of figures.falseAccepts)
    lines.push(`FALSE ACCEPT  ${trial.file} passed as ${trial.claimed} (r ${digits(trial.correlation)})`);
  for (const trial of figures.ownNotPassed)
    lines.push(
      `not passed    ${trial.file}: ${trial.verdict}, ${trial.decidedBy} (r ${digits(trial.correlation)}, lead ${digits(trial.lead)})`
    );
  for (const { material, takenFor, count } of figures.confused)
    lines.push(`best match    ${material} taken for ${takenFor}: ${count}`);
  return lines;
}

function row(name: string, rate: Rate | null): string {
  if (rate === null) return `${name.padEnd(32)} none tried`;
  const { count, of, interval } = rate;
  return `${name.padEnd(32)} ${percent(rate.rate)} (${count} of ${of}; 95 % interval ${percent(interval.low)} to ${percent(interval.high)})`;
}

const percent = (share: number | null): string => (share === null ? 'none' : `${(100 * share).toFixed(1)} %`);
const digits = (value: number | null): string => (value === null ? 'none' : value.toFixed(3));

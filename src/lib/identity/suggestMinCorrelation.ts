import { correlation } from '../spectra/compare/correlation';
import { applySteps } from '../spectra/preprocess/steps';
import type { LabelledReference, MethodDefinition } from './method';

/**
 * Criteria that suit these references: the correlation limit lies below the worst agreement among them by three
 * times their usual disagreement, within 0.90 and 0.95. Above that a scan with a little more noise than the references
 * would fail for its noise alone, while what other materials share with this one is far below.
 */
export function suggestMinCorrelation(
  definition: MethodDefinition,
  references: readonly LabelledReference[]
): number {
  const rows = references.map((reference) => applySteps(reference.spectrum, definition.recipe).intensity);
  if (rows.length < 2) return 0.9;
  const agreements = rows.map((row, i) => {
    const others = new Float64Array(row.length);
    rows.forEach((other, k) => {
      if (k !== i) for (let j = 0; j < others.length; j++) others[j] += other[j];
    });
    return correlation(row, others);
  });
  const worst = Math.min(...agreements);
  const usual = agreements.reduce((sum, value) => sum + value, 0) / agreements.length;
  return Math.min(0.95, Math.max(0.9, worst - 3 * (1 - usual)));
}

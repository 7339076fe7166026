import type { BandNote, CriterionResult, Explanation, QualityGate, Rival, Verdict } from './decision';
import { decisive } from './criteria';
import type { Measurement } from './measure';
import { estimateMixture } from './mixture';
import type { PreparedMethod, PreparedRivals } from './prepared';

/** Bands listed at most, the furthest outside first. */
const MOST_BANDS = 8;

/** Why a measurement gave no result. */
export function explainGate(gate: QualityGate): Explanation {
  const message = gate.message ?? 'The measurement cannot be judged.';
  const split = message.indexOf('. ');
  const reason = split < 0 ? message : message.slice(0, split + 1);
  const advice = split < 0 ? 'Measure again.' : message.slice(split + 2);
  return {
    reason,
    advice,
    detail: message,
    decidedBy: gate.code,
    bands: [],
    causes: [],
    rivals: [],
    mixture: []
  };
}

/** Why the verdict is what it is. `reason` and `advice` never name another material: an operator reads them. */
export function explain(
  verdict: Exclude<Verdict, 'invalid'>,
  results: readonly CriterionResult[],
  measured: Measurement,
  method: PreparedMethod,
  rivals: PreparedRivals
): Explanation {
  const worst = decisive(results);
  const ranked: Rival[] = measured.rivals.map(({ index, correlation }) => {
    const { materialId, itemCode, name } = rivals.entries[index];
    return { materialId, itemCode, name, correlation };
  });
  const bands = bandNotes(measured, method);
  const mixture = verdict === 'pass' ? [] : estimateMixture(measured, method, rivals);
  return {
    reason: reasonOf(verdict, worst),
    advice: adviceOf(verdict),
    detail: detailOf(verdict, worst, measured, ranked, bands),
    decidedBy: worst.code,
    bands,
    causes: verdict === 'pass' ? [] : causesOf(measured, results, ranked),
    rivals: ranked,
    mixture
  };
}

const REASONS: Readonly<Record<CriterionResult['code'], { readonly fail: string; readonly near: string }>> = {
  correlation: {
    fail: 'The spectrum does not match what the label claims.',
    near: 'The match is just below the limit.'
  },
  'hotelling-t2': {
    fail: 'The spectrum differs from the references more than lots do.',
    near: 'The spectrum differs from the references a little more than lots do.'
  },
  'q-residual': {
    fail: 'Part of the spectrum is not explained by the claimed material.',
    near: 'A small part of the spectrum is not explained by the claimed material.'
  },
  'best-match': {
    fail: 'The spectrum does not match what the label claims.',
    near: 'The claimed material and another one match nearly equally well.'
  },
  admixture: {
    fail: 'The spectrum looks like the claimed material mixed with another one.',
    near: 'The spectrum may hold a little of another material.'
  },
  'unexplained-bands': {
    fail: 'The spectrum has bands that the claimed material does not have.',
    near: 'The spectrum may have a band that the claimed material does not have.'
  },
  'missing-bands': {
    fail: 'Bands of the claimed material are missing.',
    near: 'A band of the claimed material is weaker than it should be.'
  }
};

function reasonOf(verdict: Exclude<Verdict, 'invalid'>, worst: CriterionResult): string {
  if (verdict === 'pass') return 'The identity agrees with the label.';
  return REASONS[worst.code][verdict === 'fail' ? 'fail' : 'near'];
}

function adviceOf(verdict: Exclude<Verdict, 'invalid'>): string {
  if (verdict === 'pass') return 'Go on with the next container.';
  if (verdict === 'fail') return 'Set the container aside and call QA.';
  return 'Leave the container where it is and ask QA.';
}

function detailOf(
  verdict: string,
  worst: CriterionResult,
  measured: Measurement,
  ranked: readonly Rival[],
  bands: readonly BandNote[]
): string {
  const best = ranked[0];
  const parts: string[] = [];
  if (verdict !== 'pass')
    parts.push(
      `Decided by ${worst.code.replaceAll('-', ' ')}: ${plain(worst.value)}, limit ${plain(worst.limit)}.`
    );
  if (best) {
    const ahead = best.correlation > measured.correlation;
    parts.push(
      `${ahead ? 'A better match' : 'The next best match'} is ${best.name} (${best.itemCode}) with r = ${best.correlation.toFixed(4)}; the claimed material has r = ${measured.correlation.toFixed(4)}.`
    );
  }
  if (verdict !== 'pass' && bands.length > 0) {
    const list = (kind: BandNote['kind']) =>
      bands
        .filter((band) => band.kind === kind)
        .map((band) => Math.round(band.shiftCm1))
        .join(', ');
    if (list('found-unexpected')) parts.push(`Not expected at ${list('found-unexpected')} cm-1.`);
    if (list('expected-missing')) parts.push(`Missing or weak at ${list('expected-missing')} cm-1.`);
  }
  return parts.join(' ');
}

const plain = (value: number): string =>
  Math.abs(value) >= 1000 ? value.toFixed(0) : Number(value.toPrecision(4)).toString();

/** Places where the scan leaves the references' envelope by a tenth of the allowed height or more. */
function bandNotes(measured: Measurement, method: PreparedMethod): BandNote[] {
  const { outside } = measured.display;
  const { gridCm1 } = method.display;
  const least = method.fitted.definition.criteria.maxUnexplainedBand / 2;
  const notes: BandNote[] = [];
  for (let i = 1; i + 1 < outside.length; i++) {
    const size = Math.abs(outside[i]);
    const peak =
      size >= Math.abs(outside[i - 1]) && size > Math.abs(outside[i + 1]) && outside[i] * outside[i - 1] >= 0;
    if (size < least || !peak) continue;
    notes.push({
      shiftCm1: gridCm1[i],
      relativeHeight: size,
      kind: outside[i] > 0 ? 'found-unexpected' : 'expected-missing'
    });
  }
  return notes
    .sort((a, b) => b.relativeHeight - a.relativeHeight)
    .slice(0, MOST_BANDS)
    .sort((a, b) => a.shiftCm1 - b.shiftCm1);
}

function causesOf(
  measured: Measurement,
  results: readonly CriterionResult[],
  ranked: readonly Rival[]
): string[] {
  const best = ranked[0];
  const failed = (code: CriterionResult['code']) =>
    results.some((result) => result.code === code && result.outcome !== 'met');
  const causes: { readonly weight: number; readonly text: string }[] = [];
  if (best && best.correlation > measured.correlation)
    causes.push({ weight: 1 + best.correlation, text: 'Another material.' });
  if (measured.linerCorrelation > 0.3)
    causes.push({ weight: measured.linerCorrelation, text: 'Much of the light came from the liner.' });
  if (Math.abs(measured.searchedShiftCm1) >= 1.5)
    causes.push({ weight: 0.6, text: 'The Raman shift axis is off.' });
  if (failed('unexplained-bands') && measured.correlation > 0.6)
    causes.push({ weight: 0.7, text: 'A mixture: bands of a second material.' });
  if (failed('missing-bands') && !failed('unexplained-bands'))
    causes.push({ weight: 0.4, text: 'Another form, hydrate or orientation of the material.' });
  return causes.sort((a, b) => b.weight - a.weight).map((cause) => cause.text);
}

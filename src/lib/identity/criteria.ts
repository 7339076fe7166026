import type { CriterionCode, CriterionResult, Verdict } from './decision';
import type { Measurement } from './measure';
import type { MethodCriteria } from './method';

/** A distance up to this many times its limit is near it: a person decides. */
const DISTANCE_GUARD = 1.5;
const BAND_GUARD = 1.5;
/** Share of another material that is let pass where a method does not say: a fifth of a weak scatterer shows as 0.08. */
const MAX_ADMIXTURE = 0.06;
const ADMIXTURE_GUARD = 1.5;
/** Margins smaller than this, in units of the limit, mark a pass as near a limit. */
const NEAR_LIMIT = 0.1;

/** Each criterion from unrounded values. Order is the order in which a verdict is explained. */
export function judge(
  measured: Measurement,
  criteria: MethodCriteria,
  limits: { readonly t2: number; readonly q: number }
): CriterionResult[] {
  const { correlation, display } = measured;
  const rival = measured.rivals[0]?.correlation ?? null;
  const band = criteria.maxUnexplainedBand;
  const results = [
    atLeast(
      'correlation',
      correlation,
      criteria.minCorrelation,
      criteria.minCorrelation - criteria.guardBand,
      1 - criteria.minCorrelation
    ),
    atMost('hotelling-t2', measured.t2, limits.t2, DISTANCE_GUARD),
    atMost('q-residual', measured.q, limits.q, DISTANCE_GUARD),
    // A weak scan's noise stands out like small bands; the limits carry it, so that weak is not called wrong.
    atMost('unexplained-bands', display.largestUnexplained, band + display.noiseHeight, BAND_GUARD),
    // A missing band is judged twice as leniently: orientation takes height from bands, and nothing adds any.
    atMost('missing-bands', display.largestMissing, 2 * band + display.noiseHeight, BAND_GUARD)
  ];
  if (rival !== null)
    results.push(
      atMost(
        'admixture',
        measured.admixture?.certainShare ?? 0,
        criteria.maxAdmixture ?? MAX_ADMIXTURE,
        ADMIXTURE_GUARD
      )
    );
  // With the rival ahead the material is another one; with it close behind, nobody can tell.
  if (rival !== null)
    results.push(atLeast('best-match', correlation - rival, criteria.rivalGap, 0, criteria.rivalGap));
  return results;
}

function atLeast(
  code: CriterionCode,
  value: number,
  limit: number,
  floor: number,
  unit: number
): CriterionResult {
  const outcome = value >= limit ? 'met' : value >= floor ? 'near' : 'not-met';
  return { code, value, limit, sense: 'at-least', outcome, margin: (value - limit) / Math.max(unit, 1e-12) };
}

function atMost(code: CriterionCode, value: number, limit: number, guard: number): CriterionResult {
  const outcome = value <= limit ? 'met' : value <= limit * guard ? 'near' : 'not-met';
  return { code, value, limit, sense: 'at-most', outcome, margin: (limit - value) / Math.max(limit, 1e-12) };
}

/** The verdict of the criteria alone: one not met fails, one near cannot tell, all met pass. */
export function verdictOf(results: readonly CriterionResult[]): Exclude<Verdict, 'invalid'> {
  if (results.some((result) => result.outcome === 'not-met')) return 'fail';
  return results.some((result) => result.outcome === 'near') ? 'inconclusive' : 'pass';
}

/**
 * The criterion that decided: among those of the worst outcome, the one furthest on the wrong side (closest to its
 * limit on a pass). One merely near never speaks for a fail.
 */
export function decisive(results: readonly CriterionResult[]): CriterionResult {
  const { outcome } = results.reduce((worst, result) =>
    SEVERITY[result.outcome] > SEVERITY[worst.outcome] ? result : worst
  );
  return results
    .filter((result) => result.outcome === outcome)
    .reduce((worst, result) => (result.margin < worst.margin ? result : worst));
}

const SEVERITY = { met: 0, near: 1, 'not-met': 2 } as const;

export const isNearLimit = (results: readonly CriterionResult[]): boolean =>
  results.some((result) => result.outcome === 'met' && result.margin < NEAR_LIMIT);

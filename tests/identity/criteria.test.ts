import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decisive, isNearLimit, judge, verdictOf } from '$lib/identity/criteria';
import type { CriterionCode, CriterionResult } from '$lib/identity/decision';
import type { Measurement } from '$lib/identity/measure';
import type { MethodCriteria } from '$lib/identity/method';

const CRITERIA: MethodCriteria = {
  minCorrelation: 0.95,
  guardBand: 0.02,
  significance: 0.01,
  components: 3,
  rivalGap: 0.02,
  minSignalToNoise: 15,
  maxUnexplainedBand: 0.1
};
const LIMITS = { t2: 20, q: 0.5 };

interface Figures {
  readonly correlation: number;
  readonly t2: number;
  readonly q: number;
  readonly unexplained: number;
  readonly missing: number;
  readonly noiseHeight: number;
  readonly admixture: number;
  readonly rival: number | null;
}
const GOOD: Figures = {
  correlation: 0.99,
  t2: 5,
  q: 0.1,
  unexplained: 0.01,
  missing: 0.01,
  noiseHeight: 0,
  admixture: 0,
  rival: 0.5
};

function measurementOf(figures: Figures): Measurement {
  const none = new Float64Array(0);
  return {
    correlation: figures.correlation,
    searchedShiftCm1: 0,
    matchedWidthCm1: 0,
    noiseShare: 0,
    admixture:
      figures.admixture > 0
        ? { index: 0, share: figures.admixture, certainShare: figures.admixture, explained: 1 }
        : null,
    t2: figures.t2,
    q: figures.q,
    rivals: figures.rival === null ? [] : [{ index: 0, correlation: figures.rival }],
    linerCorrelation: 0,
    display: {
      scan: none,
      residual: none,
      outside: none,
      largestUnexplained: figures.unexplained,
      largestMissing: figures.missing,
      noiseHeight: figures.noiseHeight,
      mean: none,
      low: none,
      high: none
    }
  };
}

const judged = (change: Partial<Figures>) => judge(measurementOf({ ...GOOD, ...change }), CRITERIA, LIMITS);
const outcome = (code: CriterionCode, change: Partial<Figures>) =>
  judged(change).find((result) => result.code === code)?.outcome;

/** The next double above and below a positive one. */
const above = (value: number) => value * (1 + 2 ** -52);
const below = (value: number) => value * (1 - 2 ** -53);

describe('a criterion is judged on the value as computed, not as shown', () => {
  it('a correlation at its limit is met, the next number below is near, and below the guard band is not met', () => {
    const floor = CRITERIA.minCorrelation - CRITERIA.guardBand;
    expect(outcome('correlation', { correlation: 0.95 })).toBe('met');
    expect(outcome('correlation', { correlation: above(0.95) })).toBe('met');
    expect(outcome('correlation', { correlation: below(0.95) })).toBe('near');
    expect(outcome('correlation', { correlation: floor })).toBe('near');
    expect(outcome('correlation', { correlation: below(floor) })).toBe('not-met');
  });

  it('0.94999 shown as 0.950 is not rounded into a pass', () => {
    expect((0.94999).toFixed(3)).toBe('0.950');
    expect(verdictOf(judged({ correlation: 0.94999 }))).toBe('inconclusive');
  });

  const distances: readonly [CriterionCode, (value: number) => Partial<Figures>, number][] = [
    ['hotelling-t2', (t2) => ({ t2 }), 20],
    ['q-residual', (q) => ({ q }), 0.5],
    ['unexplained-bands', (unexplained) => ({ unexplained }), 0.1],
    ['missing-bands', (missing) => ({ missing }), 0.2],
    ['admixture', (admixture) => ({ admixture }), 0.06]
  ];
  it.each(distances)(
    '%s: at its limit met, just above near, up to half above near, beyond not met',
    (code, figure, limit) => {
      expect(outcome(code, figure(below(limit)))).toBe('met');
      expect(outcome(code, figure(limit))).toBe('met');
      expect(outcome(code, figure(above(limit)))).toBe('near');
      expect(outcome(code, figure(limit * 1.5))).toBe('near');
      expect(outcome(code, figure(above(limit * 1.5)))).toBe('not-met');
    }
  );

  it('another material as good as the claimed one cannot be told, and a better one is not the claimed one', () => {
    expect(outcome('best-match', { correlation: 1, rival: 0.98 })).toBe('met');
    expect(outcome('best-match', { correlation: 1, rival: above(0.98) })).toBe('near');
    expect(outcome('best-match', { correlation: 0.99, rival: 0.99 })).toBe('near');
    expect(outcome('best-match', { correlation: 0.99, rival: above(0.99) })).toBe('not-met');
  });

  it('without any other material there is no best match to judge', () => {
    expect(outcome('best-match', { rival: null })).toBeUndefined();
    expect(verdictOf(judged({ rival: null }))).toBe('pass');
  });
});

describe('a verdict follows from its criteria alone', () => {
  const ALL: readonly CriterionCode[] = judged({}).map((result) => result.code);
  const results = (outcomes: readonly CriterionResult['outcome'][]): CriterionResult[] =>
    judged({}).map((result, i) => ({ ...result, outcome: outcomes[i] ?? 'met' }));

  it('every criterion met is a pass', () => {
    expect(ALL).toHaveLength(7);
    expect(verdictOf(judged({}))).toBe('pass');
  });

  it.each(ALL.map((code, i) => [code, i] as const))(
    '%s alone near is inconclusive, alone not met is a fail',
    (_, i) => {
      const one = (outcome: CriterionResult['outcome']) =>
        results(ALL.map((__, k) => (k === i ? outcome : 'met')));
      expect(verdictOf(one('near'))).toBe('inconclusive');
      expect(verdictOf(one('not-met'))).toBe('fail');
    }
  );

  it('one not met is a fail however many others are near', () => {
    expect(verdictOf(results(['near', 'near', 'near', 'near', 'near', 'near', 'not-met']))).toBe('fail');
  });

  it('a pass within a tenth of a limit is marked as near it', () => {
    expect(isNearLimit(judged({}))).toBe(false);
    expect(isNearLimit(judged({ t2: 18.1 }))).toBe(true);
    expect(isNearLimit(judged({ t2: 17.9 }))).toBe(false);
  });

  it('the criterion furthest on the wrong side is the one that decided', () => {
    expect(decisive(judged({ q: 50, t2: 30 })).code).toBe('q-residual');
    expect(decisive(judged({ correlation: 0.2, rival: null })).code).toBe('correlation');
  });

  it('one merely near never speaks for a fail, however far it is from its limit', () => {
    const mixed = judged({ t2: 29.9, correlation: 0.929 });
    expect(mixed.filter((result) => result.outcome !== 'met').map((result) => result.code)).toEqual([
      'correlation',
      'hotelling-t2'
    ]);
    expect(mixed[1].margin).toBeLessThan(mixed[0].margin);
    expect(decisive(mixed).code).toBe('correlation');
  });

  it('making any figure worse never makes the verdict better', () => {
    const rank = { fail: 0, inconclusive: 1, pass: 2 };
    const figures = fc.record({
      correlation: fc.double({ min: -1, max: 1, noNaN: true }),
      t2: fc.double({ min: 0, max: 60, noNaN: true }),
      q: fc.double({ min: 0, max: 2, noNaN: true }),
      unexplained: fc.double({ min: 0, max: 1, noNaN: true }),
      missing: fc.double({ min: 0, max: 1, noNaN: true }),
      noiseHeight: fc.constant(0),
      admixture: fc.double({ min: 0, max: 1, noNaN: true }),
      rival: fc.double({ min: -1, max: 1, noNaN: true })
    });
    const worse = fc.double({ min: 0, max: 1, noNaN: true });
    fc.assert(
      fc.property(
        figures,
        worse,
        fc.constantFrom(...(Object.keys(GOOD) as (keyof Figures)[]).filter((name) => name !== 'noiseHeight')),
        (from, by, which) => {
          const change = which === 'correlation' ? from.correlation - by : (from[which] as number) + by * 10;
          const after = verdictOf(judged({ ...from, [which]: change }));
          expect(rank[after]).toBeLessThanOrEqual(rank[verdictOf(judged(from))]);
        }
      ),
      { numRuns: 2000 }
    );
  });
});

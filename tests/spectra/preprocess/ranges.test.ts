import { describe, expect, it } from 'vitest';
import { dropRanges, keepRanges } from '$lib/spectra/preprocess/ranges';
import { uniformSegments } from '$lib/spectra/preprocess/segments';
import { rippledCurve } from '../../support/preprocessCurve';

// 400 to 519 cm-1 in steps of 1.
const curve = rippledCurve();

describe('choosing ranges', () => {
  it('keeps the points inside, ends included, with their own intensities', () => {
    const kept = keepRanges.apply(
      curve,
      {
        ranges: [
          { fromCm1: 410, toCm1: 419 },
          { fromCm1: 500, toCm1: 510 }
        ]
      },
      {}
    );
    expect(kept.shiftCm1).toHaveLength(21);
    expect([kept.shiftCm1[0], kept.shiftCm1[9], kept.shiftCm1[10], kept.shiftCm1[20]]).toEqual([
      410, 419, 500, 510
    ]);
    expect([...kept.intensity]).toEqual([
      ...curve.intensity.slice(10, 20),
      ...curve.intensity.slice(100, 111)
    ]);
  });

  it('keeping and dropping the same ranges part the spectrum in two', () => {
    const ranges = [
      { fromCm1: 404.5, toCm1: 430.2 },
      { fromCm1: 420, toCm1: 450 }
    ];
    const kept = [...keepRanges.apply(curve, { ranges }, {}).shiftCm1];
    const left = [...dropRanges.apply(curve, { ranges }, {}).shiftCm1];
    expect([...kept, ...left].sort((a, b) => a - b)).toEqual([...curve.shiftCm1]);
    expect(kept.every((x) => x >= 404.5 && x <= 450)).toBe(true);
  });

  it('ranges that leave nothing, or too little to judge, are refused', () => {
    const outside = { ranges: [{ fromCm1: 2000, toCm1: 2100 }] };
    expect(() => keepRanges.apply(curve, outside, {})).toThrow(
      expect.objectContaining({ code: 'no-points-left' })
    );
    const nearlyAll = { ranges: [{ fromCm1: 405, toCm1: 600 }] };
    expect(() => dropRanges.apply(curve, nearlyAll, {})).toThrow(
      expect.objectContaining({ code: 'too-few-points' })
    );
  });

  it('a range upside down and an empty list are refused in words', () => {
    const upsideDown = keepRanges.options.safeParse({ ranges: [{ fromCm1: 500, toCm1: 400 }] });
    expect(upsideDown.error?.issues[0].message).toContain('above From');
    expect(keepRanges.options.safeParse({ ranges: [] }).error?.issues[0].message).toContain('at least one');
  });
});

describe('uniform segments', () => {
  it('one for a whole grid, one more for every gap', () => {
    const cut = dropRanges.apply(
      curve,
      {
        ranges: [
          { fromCm1: 430, toCm1: 430 },
          { fromCm1: 450, toCm1: 470 }
        ]
      },
      {}
    );
    expect(uniformSegments(curve.shiftCm1)).toEqual({ stepCm1: 1, segments: [{ start: 0, end: 120 }] });
    expect(uniformSegments(cut.shiftCm1).segments).toEqual([
      { start: 0, end: 30 },
      { start: 30, end: 49 },
      { start: 49, end: 98 }
    ]);
  });

  it('bears the rounding of a grid of tenths far from zero', () => {
    const tenths = Float64Array.from({ length: 30_000 }, (_, i) => 300 + i * 0.1);
    const { stepCm1, segments } = uniformSegments(tenths);
    expect(stepCm1).toBeCloseTo(0.1, 9);
    expect(segments).toHaveLength(1);
  });

  it('an axis whose spacing drifts, or jumps by a part of a step, is refused', () => {
    const drifting = curve.shiftCm1.map((x, i) => x + 1e-4 * i * i);
    const jumping = curve.shiftCm1.map((x, i) => x + (i > 50 ? 0.5 : 0));
    for (const axis of [drifting, jumping]) {
      expect(() => uniformSegments(axis)).toThrow(expect.objectContaining({ code: 'axis-not-uniform' }));
    }
    expect(() => uniformSegments(Float64Array.of(5))).toThrow(
      expect.objectContaining({ code: 'too-few-points' })
    );
  });
});

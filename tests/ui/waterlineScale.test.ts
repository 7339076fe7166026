import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { waterlinePlaces } from '$lib/ui/kit/waterlineScale';

describe('the scale of a score against its limit', () => {
  it('spreads the room between a correlation limit and 1 over the good side', () => {
    const places = waterlinePlaces(0.975, 0.95, 'at-least');
    expect(places.limit).toBeCloseTo(0.6, 12);
    expect(places.value).toBeCloseTo(0.8, 12);
    expect(waterlinePlaces(1, 0.95, 'at-least').value).toBeCloseTo(1, 12);
  });

  it('spreads the room between 0 and a distance limit over the good side', () => {
    expect(waterlinePlaces(0, 12, 'at-most').value).toBeCloseTo(0, 12);
    expect(waterlinePlaces(6, 12, 'at-most').value).toBeCloseTo(0.2, 12);
  });

  it('says when a value lies beyond the end of the scale', () => {
    expect(waterlinePlaces(0.2, 0.95, 'at-least')).toMatchObject({ value: 0, beyond: true });
    expect(waterlinePlaces(900, 12, 'at-most')).toMatchObject({ value: 1, beyond: true });
    expect(waterlinePlaces(11, 12, 'at-most').beyond).toBe(false);
  });

  it('never draws a value on the other side of its limit, nor upon it unless they are equal', () => {
    const any = fc.double({ min: -1e6, max: 1e6, noNaN: true });
    fc.assert(
      fc.property(
        any,
        any,
        fc.constantFrom('at-least' as const, 'at-most' as const),
        (value, limit, sense) => {
          const places = waterlinePlaces(value, limit, sense);
          expect(Math.sign(places.value - places.limit)).toBe(Math.sign(value - limit));
          expect(places.value).toBeGreaterThanOrEqual(0);
          expect(places.value).toBeLessThanOrEqual(1);
        }
      )
    );
  });
});

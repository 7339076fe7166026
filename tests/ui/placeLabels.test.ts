import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { placeAbove, spreadBeside } from '$lib/ui/spectrum/placeLabels';

describe('labels above the plot', () => {
  it('stand in one row while they do not touch', () => {
    expect(placeAbove([50, 150], [40, 40], 0, 200).map((label) => label.row)).toEqual([0, 0]);
    expect(placeAbove([50, 60], [40, 40], 0, 200).map((label) => label.row)).toEqual([0, 1]);
  });

  it('never cover one another and stay inside', () => {
    const label = fc.tuple(fc.integer({ min: 0, max: 600 }), fc.integer({ min: 10, max: 120 }));
    fc.assert(
      fc.property(fc.array(label, { maxLength: 20 }), (labels) => {
        const widths = labels.map(([, width]) => width);
        const placed = placeAbove(
          labels.map(([centre]) => centre),
          widths,
          0,
          600
        );
        for (const [i, a] of placed.entries()) {
          expect(a.centre - widths[i] / 2).toBeGreaterThanOrEqual(0);
          expect(a.centre + widths[i] / 2).toBeLessThanOrEqual(600);
          for (const [j, b] of placed.entries()) {
            if (j <= i || a.row !== b.row) continue;
            expect(Math.abs(a.centre - b.centre)).toBeGreaterThanOrEqual((widths[i] + widths[j]) / 2);
          }
        }
      })
    );
  });
});

describe('labels beside the plot', () => {
  it('stay where they are while they are apart', () => {
    expect(spreadBeside([10, 50, 90], 20, 0, 100)).toEqual([10, 50, 90]);
  });

  it('keep their order and their distance, and stay inside where there is room', () => {
    fc.assert(
      fc.property(fc.array(fc.integer({ min: 0, max: 300 }), { minLength: 1, maxLength: 10 }), (wanted) => {
        const spread = spreadBeside(wanted, 30, 0, 300);
        const order = wanted.map((_, i) => i).sort((a, b) => wanted[a] - wanted[b]);
        for (const [place, i] of order.entries()) {
          expect(spread[i]).toBeGreaterThanOrEqual(0);
          expect(spread[i]).toBeLessThanOrEqual(300);
          if (place > 0) expect(spread[i] - spread[order[place - 1]]).toBeGreaterThanOrEqual(30);
        }
      })
    );
  });
});

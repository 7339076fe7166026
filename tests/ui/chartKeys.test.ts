import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { keysOf, type ChartPlace } from '$lib/ui/spectrum/chartKeys';
import { bandBeside, keptWithin, moved, zoomed } from '$lib/ui/spectrum/chartWindow';

const axis = Array.from({ length: 1801 }, (_, i) => 200 + i);
const place: ChartPlace = {
  view: [200, 2000],
  whole: [200, 2000],
  cursor: 1000,
  axis,
  markers: [
    { shiftCm1: 1600, label: '1600' },
    { shiftCm1: 620.4, label: '620' },
    { shiftCm1: 1000, label: '1000' }
  ]
};

describe('keys in the chart', () => {
  it.each([
    ['ArrowRight', false, 1001],
    ['ArrowLeft', false, 999],
    ['ArrowRight', true, 1010],
    ['ArrowLeft', true, 990],
    [']', false, 1600],
    ['[', false, 620],
    ['Home', false, 200],
    ['End', false, 2000]
  ])('%s with shift %s moves the cursor from 1000 to %d', (key, shift, to) => {
    expect(keysOf(key, shift, place)?.cursor).toBe(to);
  });

  it('stop at the ends of the line', () => {
    expect(keysOf('ArrowLeft', true, { ...place, cursor: 203 })?.cursor).toBe(200);
    expect(keysOf('ArrowRight', false, { ...place, cursor: 2000 })?.cursor).toBe(2000);
  });

  it('begin in the middle of the window when there is no cursor yet', () => {
    expect(keysOf('ArrowRight', false, { ...place, cursor: null })?.cursor).toBe(1100);
  });

  it('draw the window after the cursor', () => {
    const act = keysOf(']', false, { ...place, view: [900, 1100] });
    expect(act).toEqual({ cursor: 1600, view: [1400, 1600] });
  });

  it('zoom about the cursor, and back to the whole range', () => {
    expect(keysOf('+', false, place)?.view).toEqual([600, 1500]);
    expect(keysOf('0', false, place)).toEqual({ view: null });
  });

  it('leave all other keys to the page, and brackets too where there is no band', () => {
    expect(['Tab', 'Enter', 'a', '/'].map((key) => keysOf(key, false, place))).toEqual([
      null,
      null,
      null,
      null
    ]);
    expect(keysOf(']', false, { ...place, cursor: 1600 })).toBeNull();
    expect(keysOf('ArrowLeft', false, { ...place, axis: [] })).toBeNull();
  });
});

describe('the window of the chart', () => {
  const end = fc.double({ min: -5000, max: 5000, noNaN: true });

  it('stays inside the whole range, rising and at least 10 cm-1 wide', () => {
    fc.assert(
      fc.property(end, end, (a, b) => {
        const [from, to] = keptWithin([a, b], [200, 2000]);
        expect(from).toBeGreaterThanOrEqual(200);
        expect(to).toBeLessThanOrEqual(2000 + 1e-9);
        expect(to - from).toBeGreaterThanOrEqual(10 - 1e-9);
      })
    );
  });

  it('keeps the shift that is zoomed about in its place', () => {
    const [from, to] = zoomed([200, 2000], 0.5, 650, [200, 2000]);
    expect((650 - from) / (to - from)).toBeCloseTo((650 - 200) / 1800, 12);
  });

  it('moves no further than the range goes', () => {
    expect(moved([200, 400], -0.5, [200, 2000])).toEqual([200, 400]);
    expect(moved([200, 400], 0.5, [200, 2000])).toEqual([300, 500]);
  });

  it('finds the nearest band on either side, never the one it stands on', () => {
    expect(bandBeside([600, 1000, 1600], 1000, 1)).toBe(1600);
    expect(bandBeside([600, 1000, 1600], 1000, -1)).toBe(600);
    expect(bandBeside([600], 600, 1)).toBeNull();
  });
});

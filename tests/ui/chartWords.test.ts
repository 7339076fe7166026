import { describe, expect, it } from 'vitest';
import { intensityText, shiftText, signedText, tickText } from '$lib/ui/spectrum/chartNumbers';
import type { ChartLine } from '$lib/ui/spectrum/chartTypes';
import { lineLabel, lineStyles, namedLines } from '$lib/ui/spectrum/lineStyle';

const line = (kind: ChartLine['kind'], label: string): ChartLine => ({ x: [], y: [], kind, label });

describe('numbers of the chart', () => {
  it('are four decimals for scaled intensities and whole for counts', () => {
    expect(intensityText(0.98765)).toBe('0.9877');
    expect(intensityText(1234.4)).toBe('1234');
  });

  it('group counts above 9,999 with a thin space, and have a real minus sign', () => {
    expect(intensityText(1_234_567)).toBe('1\u2009234\u2009567');
    expect(intensityText(-45_678)).toBe('\u221245\u2009678');
    expect(intensityText(-0.25)).toBe('\u22120.2500');
  });

  it('do not print a small value as zero', () => {
    expect(intensityText(0.0000123)).toBe('0.0000123');
    expect(intensityText(0)).toBe('0.0000');
  });

  it('show a difference with its sign and a shift with one decimal', () => {
    expect([signedText(0.5), signedText(-0.5), signedText(0)]).toEqual(['+0.5000', '\u22120.5000', '0.0000']);
    expect([shiftText(1001.44), shiftText(-200)]).toEqual(['1001.4', '\u2212200.0']);
  });

  it('are as short as exact on the axis', () => {
    expect([0, 0.2, 0.30000000000000004, 20_000].map(tickText)).toEqual(['0', '0.2', '0.3', '20\u2009000']);
  });
});

describe('lines of the chart', () => {
  const lines = [
    line('reference', 'mean'),
    line('scan', 'scan'),
    ...Array.from({ length: 4 }, (_, i) => line('other', `${i}`))
  ];

  it('differ in hue and in dash: scan, reference and each of a few others', () => {
    const styles = lineStyles(lines);
    expect(new Set(styles.map((style) => style.dash)).size).toBe(lines.length);
    expect(new Set(styles.map((style) => style.stroke)).size).toBe(3);
    expect(styles.every((style) => style.width >= 1.5)).toBe(true);
  });

  it('are all named where there is room, else the scan and the reference before any other', () => {
    expect(namedLines(lines)).toEqual([0, 1, 2, 3, 4, 5]);
    expect(namedLines(lines, 4)).toEqual([0, 1, 2]);
    expect(namedLines([...lines].reverse(), 4)).toEqual([0, 4, 5]);
  });

  it('state their offset', () => {
    expect(lineLabel({ ...line('other', 'Glucose'), offset: 0.5 })).toBe('Glucose (offset +0.5)');
    expect(lineLabel({ ...line('other', 'Glucose'), offset: -0.5 })).toBe('Glucose (offset \u22120.5)');
    expect(lineLabel(line('other', 'Glucose'))).toBe('Glucose');
  });
});

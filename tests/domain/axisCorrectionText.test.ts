import { describe, expect, it } from 'vitest';
import { axisCorrectionText } from '$lib/domain/axisCorrectionText';

describe('the correction of an axis in words', () => {
  it.each([
    [{ shiftCm1: -0.4, scale: 0 }, '\u22120.40 cm-1'],
    [{ shiftCm1: 1.234, scale: 0.00025 }, '+1.23 cm-1, and +0.25 cm-1 in every 1000 cm-1'],
    [{ shiftCm1: 0, scale: -0.001 }, '\u22121.00 cm-1 in every 1000 cm-1'],
    [{ shiftCm1: 0, scale: 0 }, 'none']
  ])('%j is %s', (correction, text) => {
    expect(axisCorrectionText(correction)).toBe(text);
  });
});

import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';

const css = readFileSync('src/app.css', 'utf8');

/** Colour variables of a block of the style sheet. */
function block(selector: RegExp): Record<string, string> {
  const body = selector.exec(css)?.[1] ?? '';
  return Object.fromEntries(
    [...body.matchAll(/--([a-z-]+): (#[0-9a-f]{6});/g)].map(([, name, hex]) => [name, hex])
  );
}
const fixed = block(/:root \{([^}]*)\}/);
const day = { ...fixed, ...block(/\[data-mode='day'\] \{([^}]*)\}/) };
const MODES: Record<string, Record<string, string>> = {
  day,
  night: { ...day, ...block(/\[data-mode='night'\] \{([^}]*)\}/) },
  'dock-door': { ...day, ...block(/\[data-mode='dock-door'\] \{([^}]*)\}/) }
};

/** Contrast ratio of two colours: WCAG 2.2, definitions of relative luminance and contrast ratio. */
function contrast(a: string, b: string): number {
  const luminance = (hex: string) =>
    [1, 3, 5]
      .map((at) => parseInt(hex.slice(at, at + 2), 16) / 255)
      .map((part) => (part <= 0.04045 ? part / 12.92 : ((part + 0.055) / 1.055) ** 2.4))
      .reduce((sum, part, i) => sum + part * [0.2126, 0.7152, 0.0722][i], 0);
  const [light, dark] = [luminance(a), luminance(b)].sort((x, y) => y - x);
  return (light + 0.05) / (dark + 0.05);
}

/** Text of the first colour on the second: at least 4.5 (WCAG 2.2, 1.4.3). */
const TEXT = [
  ...['ground', 'sheet', 'raised'].flatMap((ground) =>
    [
      'pitch',
      'tar',
      'lead',
      'logwood',
      'logwood-hover',
      'verdigris-text',
      'ensign-text',
      'quarantine-ink'
    ].map((ink) => [ink, ground])
  ),
  ['rope-text', 'sheet'],
  ['on-logwood', 'logwood'],
  ['on-logwood', 'logwood-hover'],
  ['logwood', 'logwood-tint'],
  ['chalk', 'verdigris'],
  ['chalk', 'ensign'],
  ['ink', 'quarantine'],
  ['pitch', 'ensign-tint'],
  ['ensign-text', 'ensign-tint'],
  ['pitch', 'quarantine-tint'],
  ['quarantine-ink', 'quarantine-tint'],
  ['logwood', 'quarantine-tint'],
  ['logwood', 'ensign-tint'],
  ['verdigris-text', 'verdigris-tint'],
  ['rail-ink', 'rail'],
  ['rail-muted', 'rail']
];
/** Edges of controls, marks and lines on their ground: at least 3 (WCAG 2.2, 1.4.11). */
const GRAPHICS = [
  ['zinc', 'sheet'],
  ['zinc', 'ground'],
  ['rope', 'sheet'],
  ['rope', 'ground'],
  ['tell-edge', 'sheet'],
  ['focus-outer', 'focus-inner']
];

describe.each(Object.entries(MODES))('colours of the mode %s', (_, colours) => {
  it.each(TEXT)('%s can be read on %s', (ink, ground) => {
    expect(contrast(colours[ink], colours[ground])).toBeGreaterThanOrEqual(4.5);
  });

  it.each(GRAPHICS)('%s stands out from %s', (line, ground) => {
    expect(contrast(colours[line], colours[ground])).toBeGreaterThanOrEqual(3);
  });

  it('a plate stands out from the page by its fill or by its edge', () => {
    for (const fill of ['verdigris', 'ensign', 'quarantine']) {
      // By day pass and fail have no edge but their fill.
      const edge = colours[fill === 'quarantine' ? 'tell-edge' : 'plate-edge'] ?? colours[fill];
      expect(contrast(edge, colours.ground)).toBeGreaterThanOrEqual(3);
    }
  });
});

it('the contrast formula gives what WCAG gives for black on white and for one grey', () => {
  expect(contrast('#000000', '#ffffff')).toBeCloseTo(21, 10);
  // Understanding SC 1.4.3 names #767676 as the lightest grey that passes on white (from memory).
  expect(contrast('#767676', '#ffffff')).toBeGreaterThanOrEqual(4.5);
  expect(contrast('#777777', '#ffffff')).toBeLessThan(4.5);
});

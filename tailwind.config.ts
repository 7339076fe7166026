import type { Config } from 'tailwindcss';

/**
 * The design tokens, and nothing beside them: a colour, size, radius or shadow that is not listed here cannot be
 * written as a class. Colours are variables, so that the modes day, night and dock-door change them (src/app.css).
 */
const tokens = [
  'ground',
  'pitch',
  'tar',
  'lead',
  'zinc',
  'haze',
  'limewash',
  'sheet',
  'raised',
  'logwood',
  'logwood-hover',
  'logwood-tint',
  'on-logwood',
  'verdigris',
  'verdigris-text',
  'verdigris-tint',
  'ensign',
  'ensign-text',
  'ensign-tint',
  'on-ensign',
  'quarantine',
  'quarantine-ink',
  'quarantine-tint',
  'rope',
  'rope-text',
  'plate-edge',
  'rail',
  'rail-ink',
  'rail-muted',
  'rail-line',
  'ink',
  'chalk'
];

/** Type steps of desk and bay in px at the usual root size, named by it: `text-18`. */
const steps: [number, number][] = [
  [14, 1.5],
  [16, 1.5],
  [18, 1.5],
  [20, 1.4],
  [22, 1.35],
  [24, 1.35],
  [28, 1.2],
  [32, 1.2],
  [36, 1.2],
  [48, 1.1],
  [72, 1.05]
];

export default {
  theme: {
    colors: {
      transparent: 'transparent',
      current: 'currentColor',
      inherit: 'inherit',
      ...Object.fromEntries(tokens.map((name) => [name, `var(--${name})`]))
    },
    fontSize: Object.fromEntries(
      steps.map(([size, lineHeight]) => [
        String(size),
        [`${size / 16}rem`, { lineHeight: String(lineHeight) }]
      ])
    ),
    fontFamily: { sans: 'var(--sans)', mono: 'var(--mono)' },
    fontWeight: { normal: '400', semibold: '600', bold: '700' },
    borderRadius: { none: '0', DEFAULT: '2px' },
    boxShadow: { none: 'none' },
    dropShadow: { none: 'none' },
    backgroundImage: { none: 'none' }
  }
} satisfies Config;

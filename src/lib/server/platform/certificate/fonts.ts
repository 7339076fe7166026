import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';

const require = createRequire(import.meta.url);
const read = (id: string): Buffer => readFileSync(require.resolve(id));

/** Font names as the sections use them. */
export const FONT = { text: 'text', bold: 'bold', mono: 'mono', fallback: 'fallback' } as const;
export type FontName = (typeof FONT)[keyof typeof FONT];

let loaded: Record<FontName, Buffer> | null = null;

/** The embedded fonts, read once. `.woff` and not `.woff2`: the latter loses composite glyphs in pdfkit. */
export function fontFiles(): Record<FontName, Buffer> {
  loaded ??= {
    text: read(
      '@fontsource/atkinson-hyperlegible-next/files/atkinson-hyperlegible-next-latin-400-normal.woff'
    ),
    bold: read(
      '@fontsource/atkinson-hyperlegible-next/files/atkinson-hyperlegible-next-latin-700-normal.woff'
    ),
    mono: read(
      '@fontsource/atkinson-hyperlegible-mono/files/atkinson-hyperlegible-mono-latin-400-normal.woff'
    ),
    fallback: read('dejavu-fonts-ttf/ttf/DejaVuSans.ttf')
  };
  return loaded;
}

/** Whether the house fonts have every character: Latin-1 and a few marks, or else DejaVu Sans is used for the run. */
export const inHouseFont = (text: string): boolean =>
  /^[\u0020-\u007e\u00a0-\u00ff\u2013\u2014\u2018\u2019\u201c\u201d\u2026\u2212]*$/.test(text);

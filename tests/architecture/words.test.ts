import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { writtenFiles } from './sourceFiles';

/** Characters that the shipped fonts lack: a browser would borrow them from another font, or show a box. */
const MISSING = /[✓✗⁻µμΔ≥≤→←↑↓■▲●σχλ№‰]/u;
/** Words that say nothing to the person who reads them. */
const EMPTY_WORDS = /\b(please|sorry|oops|whoops|invalid input|forbidden)\b/i;

const shown = writtenFiles('src').filter(
  (path) => path.endsWith('.svelte') || /^src\/(lib\/(ui|domain)|routes)\/.*\.ts$/.test(path)
);

/** The text without comments, line by line in place, so that line numbers stay true. */
function withoutComments(text: string): string[] {
  const blank = (comment: string) => comment.replace(/[^\n]/g, ' ');
  return text
    .replace(/<!--[\s\S]*?-->/g, blank)
    .replace(/\/\*[\s\S]*?\*\//g, blank)
    .replace(/(^|[\s;{}])\/\/[^\n]*/g, blank)
    .split('\n');
}

function findings(pattern: RegExp): string[] {
  return shown.flatMap((path) =>
    withoutComments(readFileSync(path, 'utf8')).flatMap((text, i) =>
      pattern.test(text) ? [`${path}:${i + 1}: ${text.trim().slice(0, 120)}`] : []
    )
  );
}

describe('words shown to people', () => {
  it('are found by this test at all, and comments are not', () => {
    expect(shown.length).toBeGreaterThan(20);
    expect(withoutComments("const a = '≥'; // at least ≥\n/* ≤ */ b <!-- → -->").join('|')).toMatch(
      /^const a = '≥'; +\| +b +$/
    );
  });

  it('hold no character that the shipped fonts lack', () => {
    expect(findings(MISSING)).toEqual([]);
  });

  it('do not plead, apologise or scold', () => {
    expect(findings(EMPTY_WORDS)).toEqual([]);
  });
});

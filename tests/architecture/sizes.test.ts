import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { writtenFiles } from './sourceFiles';

/**
 * The most lines of code a file may have; the aim is about two thirds of it. Comments do not count: the header of a
 * format or of the decision is its specification, and must not be cut to fit.
 */
const LIMITS: [string, RegExp, number][] = [
  ['a file of the pure floors', /^src\/lib\/(spectra|identity|domain)\/.*\.ts$/, 200],
  ['a file of the server', /^src\/(lib\/server|hooks)[/.].*\.ts$/, 300],
  ['a route file', /^src\/routes\/.*\.ts$/, 300],
  ['a component or page', /^src\/.*\.svelte$/, 300],
  ['a test', /^tests\/.*\.ts$/, 500],
  ['a script', /^scripts\/.*\.(ts|mjs)$/, 300]
];

describe('a file is one idea and stays readable', () => {
  const files = writtenFiles();
  it.each(LIMITS)('%s (%s) has at most %i lines', (_, pattern, limit) => {
    const long = files
      .filter((path) => pattern.test(path))
      .map((path) => ({ path, lines: codeLines(readFileSync(path, 'utf8')) }))
      .filter(({ lines }) => lines > limit);
    expect(long).toEqual([]);
  });
});

const codeLines = (text: string): number =>
  text.split('\n').filter((line) => line.trim() !== '' && !/^\s*(\/?\*|\/\/)/.test(line)).length;

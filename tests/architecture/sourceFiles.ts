import { readFileSync, readdirSync } from 'node:fs';

/** Names in .gitignore: what is made here, not written. */
const MADE = readFileSync('.gitignore', 'utf8')
  .split('\n')
  .filter((line) => /^[\w.-]+$/.test(line));
const NOT_OURS = new Set([...MADE, '.git']);

/** The entries at the top of the checkout that somebody wrote. */
export function topLevel(): string[] {
  return readdirSync('.').filter((name) => !NOT_OURS.has(name) && !name.endsWith('.log'));
}

/** Every written file of the checkout, or of one folder, as paths from its top. */
export function writtenFiles(folder = '.'): string[] {
  return readdirSync(folder, { withFileTypes: true })
    .filter((entry) => !NOT_OURS.has(entry.name))
    .flatMap((entry) => {
      const path = folder === '.' ? entry.name : `${folder}/${entry.name}`;
      return entry.isDirectory() ? writtenFiles(path) : [path];
    });
}

/** Whether the file is text that a person reads or edits. */
export function isText(path: string): boolean {
  return /\.(ts|js|mjs|cjs|svelte|json|css|html|md|sql|txt|svg|yaml|yml|sh)$|(^|\/)\.[^/]+$|\.ci\/run$/.test(
    path
  );
}

/** The lines of a file with their numbers, from 1. */
export function numberedLines(path: string): { line: number; text: string }[] {
  return readFileSync(path, 'utf8')
    .split('\n')
    .map((text, i) => ({ line: i + 1, text }));
}

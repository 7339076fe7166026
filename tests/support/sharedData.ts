import { existsSync, readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import type { Spectrum } from '$lib/spectra/spectrum';

/** Folders of evidence that lie beside the checkout where they exist; they are not part of the product. */
const SHARED = resolve('..', 'shared');

/** Path of a shared file or folder, or null, having said so once, where it is not there. */
export function sharedPath(relative: string): string | null {
  const path = resolve(SHARED, relative);
  if (existsSync(path)) return path;
  console.log(`skipped: ../shared/${relative} is not beside this checkout`);
  return null;
}

/** A two-column file of shift and intensity with one header line. */
export function readTwoColumns(path: string): Spectrum {
  const rows = readFileSync(path, 'utf8')
    .trim()
    .split('\n')
    .slice(1)
    .map((line) => line.split(',').map(Number));
  return {
    shiftCm1: Float64Array.from(rows, (row) => row[0]),
    intensity: Float64Array.from(rows, (row) => row[1])
  };
}

/** Rows of a comma-separated table as records; fields may be quoted. Of two columns of one name the first counts. */
export function readTable(path: string): Record<string, string>[] {
  const lines = readFileSync(path, 'utf8').trim().split(/\r?\n/).map(fields);
  const [header, ...rows] = lines;
  return rows.map((row) => Object.fromEntries(header.map((name, i) => [name, row[i] ?? '']).reverse()));
}

function fields(line: string): string[] {
  const found: string[] = [];
  for (const match of line.matchAll(/(?:^|,)(?:"((?:[^"]|"")*)"|([^,]*))/g)) {
    found.push(match[1] !== undefined ? match[1].replaceAll('""', '"') : match[2]);
  }
  return found;
}

import { readdirSync, readFileSync, statSync } from 'node:fs';
import { join } from 'node:path';
import { readSpectrumFile } from '../../src/lib/spectra/formats/formats';
import type { Spectrum } from '../../src/lib/spectra/spectrum';

/** One spectrum file with what its place in the folder says of it. */
export interface Labelled {
  readonly path: string;
  readonly material: string;
  /** Lot, day or instrument: what is left out together. */
  readonly source: string;
  /** File name up to its first underscore, without extension. */
  readonly instrument: string;
  readonly bytes: Uint8Array;
  readonly spectrum: Spectrum;
}

export interface FolderContent {
  readonly spectra: readonly Labelled[];
  /** Files that could not be read, with the reader's reason. */
  readonly unread: readonly string[];
}

const READABLE = /\.(csv|txt|jdx|dx)$/i;

/**
 * Reads `folder/material/source/file`; a file directly under `material/` is a source of its own. Flat: every file
 * directly under `folder` is a material of its own.
 */
export function readFolder(folder: string, flat = false): FolderContent {
  const spectra: Labelled[] = [];
  const unread: string[] = [];
  const add = (path: string, material: string, source: string): void => {
    if (!READABLE.test(path)) return;
    const bytes = new Uint8Array(readFileSync(path));
    const read = readSpectrumFile(bytes, {});
    if (!read.ok) {
      unread.push(`${path}: ${read.problem.message}`);
      return;
    }
    const stem = (path.split('/').pop() ?? path).replace(/\.[^.]+$/, '');
    const [instrument] = stem.split('_');
    spectra.push({ path, material, source, instrument, bytes, spectrum: read.spectrum });
  };
  for (const material of sorted(folder)) {
    const place = join(folder, material);
    if (!isFolder(place)) {
      if (flat) add(place, material.replace(/\.[^.]+$/, ''), material);
      continue;
    }
    if (flat) continue;
    for (const source of sorted(place)) {
      const inner = join(place, source);
      if (isFolder(inner)) for (const file of sorted(inner)) add(join(inner, file), material, source);
      else add(inner, material, source);
    }
  }
  return { spectra, unread };
}

const sorted = (folder: string): string[] => readdirSync(folder).sort();
const isFolder = (path: string): boolean => statSync(path).isDirectory();

/** The same substance under several folder names: every spectrum of any of them bears the first name. */
export function merged(spectra: readonly Labelled[], groups: readonly (readonly string[])[]): Labelled[] {
  return spectra.map((entry) => {
    const group = groups.find((names) => names.includes(entry.material));
    if (!group) return entry;
    return { ...entry, material: group[0], source: `${entry.material}/${entry.source}` };
  });
}

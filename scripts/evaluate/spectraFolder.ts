import { readdirSync, readFileSync, statSync } from 'node:fs';
import { basename, join, relative } from 'node:path';
import { readSpectrumFile } from '../../src/lib/spectra/formats/formats';
import type { Spectrum } from '../../src/lib/spectra/spectrum';

/** One measured file of an evaluation. */
export interface LabelledFile {
  /** Path below the folder. */
  readonly file: string;
  readonly material: string;
  /** Lot, sample or instrument: what is left out as a whole. */
  readonly source: string;
  readonly bytes: Uint8Array;
  readonly spectrum: Spectrum;
}

/** A column of a table of mixtures, with its true fractions by material. */
export interface LabelledMixture {
  readonly name: string;
  readonly spectrum: Spectrum;
  readonly fractions: ReadonlyMap<string, number>;
}

export interface SpectraFolder {
  readonly files: readonly LabelledFile[];
  readonly mixtures: readonly LabelledMixture[];
  /** Files passed over, each with its reason. */
  readonly unread: readonly string[];
}

const SPECTRUM_FILE = /\.(csv|txt|jdx|dx)$/i;
const FRACTIONS = /_fractions\.csv$/i;

/**
 * Reads a folder laid out material/source/file or material/file; there the source is the file's name up to its first
 * underscore. A folder without subfolders (or `flat`) holds a file per material, named after it. In such a folder
 * X_fractions.csv beside X.csv makes X a table of mixtures of known fractions.
 */
export function readSpectraFolder(folder: string, flat = false): SpectraFolder {
  const names = readdirSync(folder).sort();
  const isFolder = (name: string) => statSync(join(folder, name)).isDirectory();
  const materials = names.filter(isFolder);
  const found: { path: string; material: string; source: string }[] = [];
  const tables: string[] = [];
  if (flat || materials.length === 0) {
    for (const name of names.filter((each) => SPECTRUM_FILE.test(each) && !FRACTIONS.test(each))) {
      const material = stem(name);
      if (names.includes(`${material}_fractions.csv`)) tables.push(material);
      else found.push({ path: join(folder, name), material, source: material });
    }
  } else {
    for (const material of materials) found.push(...filesOf(join(folder, material), material));
  }
  const files: LabelledFile[] = [];
  const unread: string[] = [];
  for (const { path, material, source } of found) {
    const bytes = new Uint8Array(readFileSync(path));
    const read = readSpectrumFile(bytes);
    const file = relative(folder, path);
    if (read.ok) files.push({ file, material, source, bytes, spectrum: read.spectrum });
    else unread.push(`${file}: ${read.problem.message}`);
  }
  return { files, mixtures: tables.flatMap((table) => readMixtures(folder, table)), unread };
}

function filesOf(folder: string, material: string) {
  return readdirSync(folder)
    .sort()
    .flatMap((name) => {
      const path = join(folder, name);
      if (statSync(path).isDirectory()) {
        const inside = readdirSync(path)
          .sort()
          .filter((file) => SPECTRUM_FILE.test(file));
        return inside.map((file) => ({ path: join(path, file), material, source: name }));
      }
      return SPECTRUM_FILE.test(name) ? [{ path, material, source: stem(name).split('_')[0] }] : [];
    });
}

const stem = (name: string): string => basename(name).replace(SPECTRUM_FILE, '');

function readMixtures(folder: string, table: string): LabelledMixture[] {
  const [header, ...rows] = commaTable(join(folder, `${table}.csv`));
  const [fractionHeader, ...fractionRows] = commaTable(join(folder, `${table}_fractions.csv`));
  const shiftCm1 = Float64Array.from(rows, (row) => Number(row[0]));
  return fractionRows.map(([name, ...values]) => {
    const column = header.indexOf(name);
    if (column < 1) throw new Error(`${table}.csv has no column ${name}.`);
    return {
      name,
      spectrum: { shiftCm1, intensity: Float64Array.from(rows, (row) => Number(row[column])) },
      fractions: new Map(values.map((value, i) => [fractionHeader[i + 1], Number(value)]))
    };
  });
}

const commaTable = (path: string): string[][] =>
  readFileSync(path, 'utf8')
    .trim()
    .split(/\r?\n/)
    .map((line) => line.split(',').map((cell) => cell.trim()));

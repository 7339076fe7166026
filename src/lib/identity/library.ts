import { resampleGrid } from '../spectra/preprocess/resample';
import { applySteps, stepSpec } from '../spectra/preprocess/steps';
import type { Spectrum } from '../spectra/spectrum';
import type { Library, LibraryEntry } from './method';

/** Step of the axis a library entry is kept on, cm-1: finer than any method's grid needs. */
const ENTRY_STEP_CM1 = 1;

/**
 * A material as a rival: the mean of its references on the axis they all cover, each despiked and scaled to unit
 * area above its lowest point, so that no reference counts more for being brighter.
 */
export function makeLibraryEntry(
  material: { readonly materialId: string; readonly itemCode: string; readonly name: string },
  references: readonly Spectrum[]
): LibraryEntry {
  if (references.length === 0) throw new RangeError(`${material.name} has no reference`);
  const from = Math.ceil(Math.max(...references.map((reference) => reference.shiftCm1[0])));
  const to = Math.floor(
    Math.min(...references.map((reference) => reference.shiftCm1[reference.shiftCm1.length - 1]))
  );
  const grid = {
    fromCm1: from,
    toCm1: from + Math.max(1, Math.floor((to - from) / ENTRY_STEP_CM1)) * ENTRY_STEP_CM1,
    stepCm1: ENTRY_STEP_CM1
  };
  const recipe = [stepSpec('despike'), stepSpec('resample', grid)];
  const mean = new Float64Array(resampleGrid(grid).length);
  for (const reference of references) {
    const { intensity } = applySteps(reference, recipe);
    const floor = intensity.reduce((least, value) => Math.min(least, value), Infinity);
    let area = 0;
    for (const value of intensity) area += value - floor;
    if (!(area > 0)) continue;
    for (let i = 0; i < mean.length; i++) mean[i] += (intensity[i] - floor) / area / references.length;
  }
  return { ...material, spectrum: { shiftCm1: resampleGrid(grid), intensity: mean } };
}

interface EntryHead {
  readonly materialId: string;
  readonly itemCode: string;
  readonly name: string;
  readonly fromCm1: number;
  readonly points: number;
}

/**
 * Packs entries into bytes that depend on nothing but their content: a 4-byte little-endian length, a JSON head of
 * that many bytes, then each entry's intensities as little-endian float64.
 */
export function encodeLibrary(entries: readonly LibraryEntry[]): Uint8Array {
  const heads: EntryHead[] = entries.map(({ materialId, itemCode, name, spectrum }) => ({
    materialId,
    itemCode,
    name,
    fromCm1: spectrum.shiftCm1[0],
    points: spectrum.shiftCm1.length
  }));
  const head = new TextEncoder().encode(JSON.stringify(heads));
  const total = heads.reduce((sum, entry) => sum + entry.points, 0);
  const bytes = new Uint8Array(4 + head.length + total * 8);
  const view = new DataView(bytes.buffer);
  view.setUint32(0, head.length, true);
  bytes.set(head, 4);
  let at = 4 + head.length;
  for (const { spectrum } of entries) {
    for (const value of spectrum.intensity) {
      view.setFloat64(at, value, true);
      at += 8;
    }
  }
  return bytes;
}

/** Unpacks what `encodeLibrary` made. @param sha256 hash of the bytes, computed by the caller */
export function decodeLibrary(bytes: Uint8Array, sha256: string): Library {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  const headLength = view.getUint32(0, true);
  const heads = JSON.parse(new TextDecoder().decode(bytes.subarray(4, 4 + headLength))) as EntryHead[];
  let at = 4 + headLength;
  const entries = heads.map(({ fromCm1, points, ...material }): LibraryEntry => {
    const shiftCm1 = new Float64Array(points);
    const intensity = new Float64Array(points);
    for (let i = 0; i < points; i++) {
      shiftCm1[i] = fromCm1 + i * ENTRY_STEP_CM1;
      intensity[i] = view.getFloat64(at, true);
      at += 8;
    }
    return { ...material, spectrum: { shiftCm1, intensity } };
  });
  return { sha256, entries };
}

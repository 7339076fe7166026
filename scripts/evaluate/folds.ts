import type { LabelledFile } from './spectraFolder';

/** What is trained on and what is decided, once. */
export interface Fold {
  readonly name: string;
  /** References by material. */
  readonly train: ReadonlyMap<string, readonly LabelledFile[]>;
  readonly held: readonly LabelledFile[];
}

/**
 * Leaves one source out at a time of every material that has several; of a material with one source, one spectrum
 * at a time. A material with one spectrum is decided under the others' methods only: its own would have seen it.
 */
export function leaveOneSourceOut(files: readonly LabelledFile[]): Fold[] {
  const byMaterial = grouped(files);
  const sourcesOf = (material: string) =>
    new Set((byMaterial.get(material) ?? []).map((file) => file.source));
  const without = (leftOut: (file: LabelledFile) => boolean) =>
    new Map(
      [...byMaterial]
        .map(([material, all]) => [material, all.filter((file) => !leftOut(file))] as const)
        .filter(([, kept]) => kept.length > 0)
    );
  const folds: Fold[] = [];
  for (const source of [...new Set(files.map((file) => file.source))].sort()) {
    const leftOut = (file: LabelledFile) => file.source === source && sourcesOf(file.material).size > 1;
    const held = files.filter(leftOut);
    if (held.length > 0) folds.push({ name: `without ${source}`, train: without(leftOut), held });
  }
  for (const [material, all] of byMaterial) {
    if (sourcesOf(material).size > 1 || all.length < 2) continue;
    for (const one of all)
      folds.push({ name: `without ${one.file}`, train: without((file) => file === one), held: [one] });
  }
  const single = [...byMaterial.values()].filter((all) => all.length === 1).flat();
  for (const one of single)
    folds.push({ name: `without ${one.file}`, train: without((file) => file === one), held: [one] });
  return folds;
}

/** One folder's spectra decided under methods built from another's. */
export function trainAndTest(train: readonly LabelledFile[], test: readonly LabelledFile[]): Fold[] {
  return [{ name: 'test', train: grouped(train), held: test }];
}

function grouped(files: readonly LabelledFile[]): Map<string, LabelledFile[]> {
  const groups = new Map<string, LabelledFile[]>();
  for (const file of files) groups.set(file.material, [...(groups.get(file.material) ?? []), file]);
  return groups;
}

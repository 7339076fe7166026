import { packRivals, type RivalMatrix } from '../spectra/compare/rivals';
import { packClassModel, type PackedClassModel } from '../spectra/model/distances';
import { displayPart } from '../spectra/preprocess/recipe';
import { applySteps, type StepSpec } from '../spectra/preprocess/steps';
import { StepRefusal } from '../spectra/preprocess/step';
import type { Spectrum } from '../spectra/spectrum';
import { linerSpectrum } from './liner';
import type { FittedMethod, Library, LibraryEntry } from './method';

/** A fitted method in working form. */
export interface PreparedMethod {
  readonly fitted: FittedMethod;
  readonly model: PackedClassModel;
  readonly stepReferences: readonly Spectrum[];
  readonly display: {
    readonly recipe: readonly StepSpec[];
    readonly gridCm1: Float64Array;
    readonly mean: Float64Array;
    readonly low: Float64Array;
    readonly high: Float64Array;
  };
  /** The bare liner after the recipe; null where the recipe cannot treat it. */
  readonly liner: Float64Array | null;
  readonly range: { readonly fromCm1: number; readonly toCm1: number; readonly stepCm1: number };
}

/** Other materials after a method's recipe, packed; those whose axis does not cover the method's are left out. */
export interface PreparedRivals {
  readonly entries: readonly LibraryEntry[];
  readonly matrix: RivalMatrix;
}

const KEEP = 64;
const methods = new Map<string, PreparedMethod>();
const rivals = new Map<string, PreparedRivals>();

/** Working form of a method; kept by its hash, since a hash names one content for ever. */
export function prepareMethod(fitted: FittedMethod, sha256: string): PreparedMethod {
  return remembered(methods, sha256, () => {
    const references = fitted.stepReferences.map(({ shiftCm1, intensity }) => ({
      shiftCm1: Float64Array.from(shiftCm1),
      intensity: Float64Array.from(intensity)
    }));
    const { recipe } = fitted.definition;
    const grid = recipe.find((step) => step.name === 'resample')?.options as {
      fromCm1: number;
      toCm1: number;
      stepCm1: number;
    };
    return {
      fitted,
      model: packClassModel(fitted.model),
      stepReferences: references,
      display: {
        recipe: displayPart(recipe),
        gridCm1: Float64Array.from(fitted.displayGridCm1),
        mean: Float64Array.from(fitted.displayMean),
        low: Float64Array.from(fitted.displayLow),
        high: Float64Array.from(fitted.displayHigh)
      },
      liner: treated(linerSpectrum(grid), recipe, references),
      range: grid
    };
  });
}

/** The library's other materials under a method's recipe; kept by both hashes. */
export function prepareRivals(
  method: PreparedMethod,
  methodSha256: string,
  library: Library,
  ownMaterialId: string
): PreparedRivals {
  return remembered(rivals, `${methodSha256} ${library.sha256} ${ownMaterialId}`, () => {
    const entries: LibraryEntry[] = [];
    const rows: Float64Array[] = [];
    for (const entry of library.entries) {
      if (entry.materialId === ownMaterialId) continue;
      const row = treated(entry.spectrum, method.fitted.definition.recipe, method.stepReferences);
      if (row === null) continue;
      entries.push(entry);
      rows.push(row);
    }
    return { entries, matrix: packRivals(rows) };
  });
}

function treated(
  spectrum: Spectrum,
  recipe: readonly StepSpec[],
  references: readonly Spectrum[]
): Float64Array | null {
  try {
    return applySteps(spectrum, recipe, references).intensity;
  } catch (error) {
    if (error instanceof StepRefusal) return null;
    throw error;
  }
}

function remembered<T>(store: Map<string, T>, key: string, make: () => T): T {
  const known = store.get(key);
  if (known !== undefined) return known;
  const made = make();
  if (store.size >= KEEP) store.delete(store.keys().next().value as string);
  store.set(key, made);
  return made;
}

import { interleavedRow } from '../spectra/compare/interleavedRows';
import { packRivals, type RivalMatrix } from '../spectra/compare/rivals';
import { packClassModel } from '../spectra/model/distances';
import { displayPart } from '../spectra/preprocess/recipe';
import { applySteps, type StepSpec } from '../spectra/preprocess/steps';
import { StepRefusal } from '../spectra/preprocess/step';
import type { Spectrum } from '../spectra/spectrum';
import { rivalsOutside, type RivalsOutside } from './admixture';
import { templatesOf, type AlignmentBounds, type Templates } from './alignment';
import { BoundedCache } from './boundedCache';
import { centredSquares } from './broaden';
import { classAtWidth, type ClassAtWidth } from './classAtWidth';
import { linerSpectrum } from './liner';
import type { FittedMethod, Library, LibraryEntry } from './method';

/** A fitted method in working form. */
export interface PreparedMethod {
  readonly fitted: FittedMethod;
  readonly gridCm1: Float64Array;
  /** The class at each width the reference may be broadened to, cm-1. */
  classAt(widthCm1: number): ClassAtWidth;
  readonly templates: Templates;
  readonly bounds: AlignmentBounds;
  /** Squared length of the treated mean, centred: what shares of signal and noise are counted in. */
  readonly squares: number;
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
  readonly outside: RivalsOutside;
  /** One row as a spectrum again, centred and of unit length. */
  rows(index: number): Float64Array;
}

const FLOAT_BYTES = 8;
const MIB = 1024 * 1024;
const methods = new BoundedCache<PreparedMethod>(
  64,
  96 * MIB,
  (method) =>
    FLOAT_BYTES *
    method.gridCm1.length *
    (method.templates.shiftsCm1.length + method.fitted.model.loadings.length + 2) *
    method.templates.widthsCm1.length
);
const rivals = new BoundedCache<PreparedRivals>(256, 192 * MIB, ({ matrix }) => matrix.values.byteLength);

/** Working form of a method; kept by its hash, since a hash names one content for ever. */
export function prepareMethod(fitted: FittedMethod, sha256: string): PreparedMethod {
  return methods.get(sha256, () => {
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
    const gridCm1 = Float64Array.from(fitted.gridCm1);
    const model = packClassModel(fitted.model);
    const bounds = {
      shiftCm1: fitted.definition.shiftSearchCm1,
      widthCm1: fitted.definition.widthSearchCm1 ?? 0
    };
    const byWidth = new Map<number, ClassAtWidth>();
    return {
      fitted,
      gridCm1,
      classAt(widthCm1) {
        const made = byWidth.get(widthCm1) ?? classAtWidth(model, gridCm1, widthCm1);
        byWidth.set(widthCm1, made);
        return made;
      },
      templates: templatesOf(model.mean, gridCm1, bounds),
      bounds,
      squares: centredSquares(model.mean),
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
  return rivals.get(`${methodSha256} ${library.sha256} ${ownMaterialId}`, () => {
    const entries: LibraryEntry[] = [];
    const rows: Float64Array[] = [];
    for (const entry of library.entries) {
      if (entry.materialId === ownMaterialId) continue;
      const row = treated(entry.spectrum, method.fitted.definition.recipe, method.stepReferences);
      if (row === null) continue;
      entries.push(entry);
      rows.push(row);
    }
    const matrix = packRivals(rows);
    return {
      entries,
      matrix,
      outside: rivalsOutside(matrix, method.classAt(0)),
      rows: (index) => interleavedRow(matrix, index)
    };
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

import type { ClassModel } from '../spectra/model/classModel';
import type { StepSpec } from '../spectra/preprocess/steps';

/** What a method owner decides: everything needed to build the model again from the same references. */
export interface MethodDefinition {
  /** Excitation wavelength the references were taken with, nm, and how far a scan's may differ. */
  readonly excitationNm: number;
  readonly excitationToleranceNm: number;
  /** Ordered recipe; it must hold exactly one `resample` step, which sets the grid every later step works on. */
  readonly recipe: readonly StepSpec[];
  readonly criteria: MethodCriteria;
  /** Whether the instrument check's fitted shift corrects the axis (when the check is within tolerance). */
  readonly correctAxis: boolean;
  /** Residual shift, cm-1, that the scorer may search on either side of the corrected axis; 0 turns it off. */
  readonly shiftSearchCm1: number;
  /** Difference of resolution, cm-1 of full width, that the scorer may make up for by broadening the sharper side. */
  readonly widthSearchCm1?: number;
}

export interface MethodCriteria {
  /** Smallest correlation with the reference mean (after the recipe). */
  readonly minCorrelation: number;
  /** Half-width below the correlation limit inside which a result is inconclusive. */
  readonly guardBand: number;
  /** Significance of the T2 and Q limits, e.g. 0.01. */
  readonly significance: number;
  /** Number of principal components of the class model. */
  readonly components: number;
  /** How much higher than the best other material's correlation the claimed one must be. */
  readonly rivalGap: number;
  /** Smallest signal-to-noise ratio of a scan. */
  readonly minSignalToNoise: number;
  /** Largest unexplained band, as a fraction of the strongest reference band. */
  readonly maxUnexplainedBand: number;
  /** Largest share of the signal that may look like one other material of the library; absent: 0.06. */
  readonly maxAdmixture?: number;
}

/** A fitted, self-contained, JSON-able method: what is frozen when a version becomes effective. */
export interface FittedMethod {
  readonly schema: 1;
  readonly engineVersion: string;
  readonly definition: MethodDefinition;
  /** Axis after the recipe, cm-1. */
  readonly gridCm1: readonly number[];
  /** Reference means at each MSC point of the recipe, in order (empty where there is none). */
  readonly stepReferences: readonly {
    readonly shiftCm1: readonly number[];
    readonly intensity: readonly number[];
  }[];
  readonly model: ClassModel;
  /**
   * Sum of squares that the references' own noise leaves after the recipe, mean over references. Absent in methods
   * fitted before engine 1.1: their scans get no allowance for noise.
   */
  readonly noiseEnergy?: number;
  /** Conformal scores of the held-out references (nonconformity, ascending). */
  readonly heldOutNonconformity: readonly number[];
  /** Bands of the reference mean before the derivative, for explanation: position cm-1, relative height. */
  readonly bands: readonly {
    readonly shiftCm1: number;
    readonly relativeHeight: number;
    readonly fwhmCm1: number;
  }[];
  /** Mean reference before derivative/scaling (baseline-corrected, unit height), on `displayGridCm1`, for plots and explanation. */
  readonly displayGridCm1: readonly number[];
  readonly displayMean: readonly number[];
  /** Point-wise smallest and largest of the references in the same treatment: the envelope drawn behind a scan. */
  readonly displayLow: readonly number[];
  readonly displayHigh: readonly number[];
  readonly referenceCount: number;
  readonly sourceCount: number;
  /** Plain sentences a method owner must read: few references, one lot only … */
  readonly cautions: readonly string[];
}

/** One reference spectrum as the fitter takes it. */
export interface LabelledReference {
  readonly id: string;
  /** Lot or instrument it comes from: the unit of cross-validation. */
  readonly source: string;
  readonly spectrum: import('../spectra/spectrum').Spectrum;
  /** Axis correction of the instrument it was measured on, if known. */
  readonly axisCorrection?: AxisCorrection;
}

/** Corrected shift = measured + shiftCm1 + scale * measured (scale near 0). From an instrument's performance check. */
export interface AxisCorrection {
  readonly shiftCm1: number;
  readonly scale: number;
}

/** Another material as a rival: its representative spectrum on the library's common axis, before any recipe. */
export interface LibraryEntry {
  readonly materialId: string;
  readonly itemCode: string;
  readonly name: string;
  /** Mean of its references, each scaled to unit area, on its own uniform axis. */
  readonly spectrum: import('../spectra/spectrum').Spectrum;
}

/** Every approved material's entry; content-addressed, so that a decision can be replayed against exactly it. */
export interface Library {
  readonly sha256: string;
  readonly entries: readonly LibraryEntry[];
}

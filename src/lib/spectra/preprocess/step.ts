import type { z } from 'zod';
import type { Spectrum } from '../spectrum';

/** What a step is for: groups steps in the method builder and lets a recipe's order be checked. */
export type StepKind = 'despike' | 'grid' | 'range' | 'baseline' | 'filter' | 'scaling';

/**
 * One preprocessing step. A stored method holds `{ name, version, options }`; a changed behaviour is a new
 * version beside the old one, and old ones stay runnable so that every stored decision still computes.
 */
export interface PreprocessStep<Name extends string, Options extends z.ZodType> {
  readonly name: Name;
  readonly version: number;
  readonly kind: StepKind;
  /** What a person calls it, e.g. "Baseline, asymmetric least squares". */
  readonly title: string;
  /** Paper or standard the step is taken from. */
  readonly source: string;
  readonly options: Options;
  /** Options that suit ordinary powders. */
  readonly defaults: z.output<Options>;
  /**
   * Pure: returns a new spectrum, never mutates its input. The axis array may be shared with the input.
   * @throws StepRefusal when the spectrum cannot be so treated (e.g. zero variance in SNV).
   */
  apply(spectrum: Spectrum, options: z.output<Options>, context: StepContext): Spectrum;
}

/** What a step may need besides its options: MSC wants the method's reference mean at the same point of the recipe. */
export interface StepContext {
  /** Mean reference at this point of the recipe, on the same axis; absent while the mean itself is computed. */
  readonly reference?: Spectrum;
}

/** A spectrum that a step cannot treat; becomes an `invalid` verdict, never a crash. */
export class StepRefusal extends Error {
  constructor(
    readonly code:
      | 'outside-axis'
      | 'zero-variance'
      | 'too-few-points'
      | 'axis-not-uniform'
      | 'no-points-left'
      | 'no-reference',
    message: string
  ) {
    super(message);
    this.name = 'StepRefusal';
  }
}

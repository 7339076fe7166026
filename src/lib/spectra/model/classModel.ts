/** A PCA class model with its limits, as plain numbers (JSON-able; float64 round-trips exactly). */
export interface ClassModel {
  /** Mean of the references after the recipe, length p. */
  readonly mean: readonly number[];
  /** Loadings, A rows of length p, orthonormal, sign fixed (largest absolute element positive). */
  readonly loadings: readonly (readonly number[])[];
  /** Eigenvalues of the covariance (divisor n-1) kept by the model, length A, descending. */
  readonly eigenvalues: readonly number[];
  /** Eigenvalues left out, descending (for the Jackson-Mudholkar limit). */
  readonly residualEigenvalues: readonly number[];
  /** Number of reference spectra. */
  readonly n: number;
  readonly limits: ClassLimits;
}

export interface ClassLimits {
  readonly significance: number;
  readonly t2: number;
  readonly q: number;
  /** Which form each limit takes, e.g. 'F, new object' / 'Jackson-Mudholkar' / 'data-driven chi-squared'. */
  readonly t2Form: string;
  readonly qForm: string;
}

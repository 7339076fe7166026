/** Numbers along an axis, as arrays of either kind. */
export type Numbers = ArrayLike<number>;

/** One line of the chart. The axis rises; what is not a number leaves a gap. */
export interface ChartLine {
  readonly x: Numbers;
  readonly y: Numbers;
  readonly label: string;
  readonly kind: 'scan' | 'reference' | 'other';
  /** Dash pattern in place of that of the kind. */
  readonly dash?: string;
  /** Added to each value before drawing, and stated in the label. */
  readonly offset?: number;
}

/** Smallest to largest of the references at each shift. */
export interface ChartEnvelope {
  readonly x: Numbers;
  readonly low: Numbers;
  readonly high: Numbers;
  readonly label?: string;
}

/** Scan minus reference; `band` is what the method allows on either side of 0. */
export interface ChartResidual {
  readonly x: Numbers;
  readonly y: Numbers;
  readonly band?: number;
  readonly label?: string;
}

/** A band named on the chart. */
export interface ChartMarker {
  readonly shiftCm1: number;
  readonly label: string;
  readonly kind?: 'reference' | 'expected-missing' | 'found-unexpected' | 'shifted';
}

export type Range = readonly [from: number, to: number];

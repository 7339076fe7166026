/** A line of a spectrum chart. */
export interface ChartLine {
  readonly x: ArrayLike<number>;
  readonly y: ArrayLike<number>;
  readonly label: string;
  readonly kind: 'scan' | 'reference' | 'other';
}

export interface ChartEnvelope {
  readonly x: ArrayLike<number>;
  readonly low: ArrayLike<number>;
  readonly high: ArrayLike<number>;
}

export interface ChartMarker {
  readonly shiftCm1: number;
  readonly label: string;
  readonly kind: string;
}

/** Ink, dash and width of each kind of line: told apart by dash as well as by hue. */
export const LINE_LOOK = {
  scan: { stroke: 'var(--ink)', dash: undefined, width: 1.75 },
  reference: { stroke: 'var(--rope)', dash: '7 4', width: 1.75 },
  other: { stroke: 'var(--action)', dash: '2 3', width: 1.75 }
} as const;

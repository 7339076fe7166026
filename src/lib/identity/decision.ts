/**
 * The result of one scan under one method version. Plain JSON: it is stored in its canonical form
 * (RFC 8785) with its SHA-256, and a replay from the raw bytes must give the same bytes again.
 */
export type Verdict = 'pass' | 'fail' | 'inconclusive' | 'invalid';

export type GateCode =
  | 'unreadable'
  | 'wrong-excitation'
  | 'axis-too-short'
  | 'step-too-coarse'
  | 'saturated'
  | 'no-signal'
  | 'low-signal'
  | 'spikes'
  | 'fluorescence'
  | 'liner-only'
  | 'check-missing'
  | 'check-expired'
  | 'not-treatable';

export type CriterionCode =
  | 'correlation'
  | 'hotelling-t2'
  | 'q-residual'
  | 'best-match'
  | 'admixture'
  | 'unexplained-bands'
  | 'missing-bands';

export interface QualityGate {
  readonly code: GateCode;
  readonly met: boolean;
  /** Value and limit where the gate is a number. */
  readonly value?: number;
  readonly limit?: number;
  /** What is wrong and what to do, in plain words; present when not met. */
  readonly message?: string;
}

export interface CriterionResult {
  readonly code: CriterionCode;
  readonly value: number;
  readonly limit: number;
  /** Whether larger values are better (correlation) or smaller (T2, Q). */
  readonly sense: 'at-least' | 'at-most';
  readonly outcome: 'met' | 'near' | 'not-met';
  /** Distance from the limit in units of the limit's own scale; positive is on the good side. */
  readonly margin: number;
}

export interface Rival {
  readonly materialId: string;
  readonly itemCode: string;
  readonly name: string;
  readonly correlation: number;
}

export interface BandNote {
  readonly shiftCm1: number;
  readonly relativeHeight: number;
  readonly kind: 'expected-missing' | 'found-unexpected' | 'shifted';
  /** For `shifted`: how far, cm-1. */
  readonly offsetCm1?: number;
}

export interface Explanation {
  /** One sentence that says why; never names a rival (the operator reads it). */
  readonly reason: string;
  /** What the operator should do next, one sentence. */
  readonly advice: string;
  /** One sentence for QA; may name a rival. */
  readonly detail: string;
  readonly decidedBy: CriterionCode | GateCode | null;
  readonly bands: readonly BandNote[];
  /** Likely physical causes, most likely first. */
  readonly causes: readonly string[];
  /** Best other materials, best first (at most five). */
  readonly rivals: readonly Rival[];
  /** Non-negative least-squares shares; an indication only. */
  readonly mixture: readonly {
    readonly itemCode: string;
    readonly name: string;
    readonly share: number;
    readonly standardError: number;
  }[];
}

export interface Decision {
  readonly schema: 1;
  readonly engineVersion: string;
  readonly methodSha256: string;
  readonly librarySha256: string;
  readonly rawSha256: string;
  readonly verdict: Verdict;
  /** True when a pass came within a guard band of a limit without entering it. */
  readonly nearLimit: boolean;
  readonly gates: readonly QualityGate[];
  readonly criteria: readonly CriterionResult[];
  readonly scores: Scores | null;
  readonly axis: {
    readonly points: number;
    readonly firstCm1: number;
    readonly lastCm1: number;
    readonly correction: { readonly shiftCm1: number; readonly scale: number } | null;
    readonly searchedShiftCm1: number;
    /** Full width by which the references were broadened to the scan's resolution; negative: the scan was. */
    readonly matchedWidthCm1: number;
  } | null;
  readonly explanation: Explanation;
  readonly readNotes: readonly string[];
}

export interface Scores {
  readonly correlation: number;
  readonly hotellingT2: number;
  readonly t2Limit: number;
  readonly qResidual: number;
  readonly qLimit: number;
  readonly bestRivalCorrelation: number | null;
  readonly signalToNoise: number;
  readonly largestUnexplainedBand: number;
  /** Share of the signal that looks like one other material; 0 where none stands out. */
  readonly admixtureShare: number;
  /** Share of the treated scan that is its own noise, 0 to 1; the limits of T2 and Q allow for it. */
  readonly noiseShare: number;
  /** Conformal p-value among the held-out references. */
  readonly conformalP: number;
}

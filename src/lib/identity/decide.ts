import { conformalP, nonconformity } from '../spectra/model/conformal';
import { readSpectrumFile } from '../spectra/formats/formats';
import type { ReadOptions, ReadSpectrum } from '../spectra/formats/format';
import { StepRefusal } from '../spectra/preprocess/step';
import type { Spectrum } from '../spectra/spectrum';
import { isNearLimit, judge, verdictOf } from './criteria';
import type { CriterionResult, Decision, QualityGate, Scores } from './decision';
import { ENGINE_VERSION } from './engineVersion';
import { explain, explainGate } from './explain';
import { firstGates, signalGates } from './gates';
import { measure, type Measurement } from './measure';
import type { AxisCorrection, FittedMethod, Library } from './method';
import { prepareMethod, prepareRivals, type PreparedMethod } from './prepared';
import { correctAxis } from './variation';

/** Everything a decision depends on; nothing else may move it. */
export interface DecideRequest {
  readonly bytes: Uint8Array;
  readonly readOptions: ReadOptions;
  readonly method: FittedMethod;
  readonly methodSha256: string;
  readonly library: Library;
  /** The claimed material. */
  readonly materialId: string;
  readonly rawSha256: string;
  readonly instrument: { readonly excitationNm: number };
  readonly check: {
    readonly state: 'valid' | 'missing' | 'expired';
    readonly correction: AxisCorrection | null;
  };
}

/**
 * Decides whether a scan is the claimed material. Pure: the same request gives the same decision to the last bit,
 * in the server and in a browser. In order: read; quality gates, any of which not met gives `invalid`; axis
 * correction from the instrument's check; recipe; correlation, T2, Q, bands outside the references' envelope, best
 * other material; verdict from unrounded values; explanation.
 */
export function decide(request: DecideRequest): Decision {
  const read = readSpectrumFile(request.bytes, request.readOptions);
  if (!read.ok) {
    const message = `The file could not be read. ${read.problem.message}`;
    return ungraded(request, [{ code: 'unreadable', met: false, message }], null, []);
  }
  const method = prepareMethod(request.method, request.methodSha256);
  const correction = request.method.definition.correctAxis ? request.check.correction : null;
  const scan = correctAxis(read.spectrum, correction);
  const gates = firstGates({
    read,
    scan,
    method,
    instrumentNm: request.instrument.excitationNm,
    check: request.check.state
  });
  if (gates.some((gate) => !gate.met)) return ungraded(request, gates, axisOf(read, correction), read.notes);
  try {
    return graded(request, read, scan, method, correction, gates);
  } catch (error) {
    if (!(error instanceof StepRefusal)) throw error;
    const message = `The spectrum cannot be treated by the method. ${error.message}`;
    return ungraded(
      request,
      [...gates, { code: 'not-treatable', met: false, message }],
      axisOf(read, correction),
      read.notes
    );
  }
}

function graded(
  request: DecideRequest,
  read: ReadSpectrum,
  scan: Spectrum,
  method: PreparedMethod,
  correction: AxisCorrection | null,
  first: readonly QualityGate[]
): Decision {
  const { gates: signalled, signal } = signalGates(scan, method);
  const gates = [...first, ...signalled];
  if (signalled.some((gate) => !gate.met))
    return ungraded(request, gates, axisOf(read, correction), read.notes);
  const rivals = prepareRivals(method, request.methodSha256, request.library, request.materialId);
  const measured = measure(scan, method, rivals);
  const axis = axisOf(read, correction, measured);
  const liner = linerGate(measured, request.method);
  if (!liner.met) return ungraded(request, [...gates, liner], axis, read.notes);
  const criteria = judge(measured, request.method.definition.criteria, request.method.model.limits);
  const verdict = verdictOf(criteria);
  return {
    ...identityOf(request),
    verdict,
    nearLimit: verdict === 'pass' && isNearLimit(criteria),
    gates: [...gates, liner],
    criteria,
    scores: scoresOf(measured, signal.ratio, request.method),
    axis,
    explanation: explain(verdict, criteria, measured, method, rivals),
    readNotes: read.notes
  };
}

/** Agreement with the bare liner above this, and above everything else, means that little but liner was seen. */
const LINER_ALONE = 0.8;

function linerGate(measured: Measurement, method: FittedMethod): QualityGate {
  const { correlation, linerCorrelation, rivals } = measured;
  const seen =
    linerCorrelation >= LINER_ALONE &&
    linerCorrelation > correlation &&
    linerCorrelation > (rivals[0]?.correlation ?? 0);
  if (!seen || correlation >= method.definition.criteria.minCorrelation)
    return { code: 'liner-only', met: true };
  return {
    code: 'liner-only',
    met: false,
    message:
      'Little but the liner was seen. Lay one layer of liner flat on the material, press the probe on it and scan again.'
  };
}

function scoresOf(measured: Measurement, ratio: number, method: FittedMethod): Scores {
  const { limits } = method.model;
  return {
    correlation: measured.correlation,
    hotellingT2: measured.t2,
    t2Limit: limits.t2,
    qResidual: measured.q,
    qLimit: limits.q,
    bestRivalCorrelation: measured.rivals[0]?.correlation ?? null,
    signalToNoise: ratio,
    largestUnexplainedBand: measured.display.largestUnexplained,
    admixtureShare: measured.admixture?.certainShare ?? 0,
    noiseShare: measured.noiseShare,
    conformalP: conformalP(method.heldOutNonconformity, nonconformity(measured.t2, measured.q, limits))
  };
}

function axisOf(
  { spectrum }: ReadSpectrum,
  correction: AxisCorrection | null,
  measured?: Measurement
): NonNullable<Decision['axis']> {
  const { shiftCm1 } = spectrum;
  return {
    points: shiftCm1.length,
    firstCm1: shiftCm1[0],
    lastCm1: shiftCm1[shiftCm1.length - 1],
    correction: correction && { shiftCm1: correction.shiftCm1, scale: correction.scale },
    searchedShiftCm1: measured?.searchedShiftCm1 ?? 0,
    matchedWidthCm1: measured?.matchedWidthCm1 ?? 0
  };
}

const identityOf = (request: DecideRequest) => ({
  schema: 1 as const,
  engineVersion: ENGINE_VERSION,
  methodSha256: request.methodSha256,
  librarySha256: request.library.sha256,
  rawSha256: request.rawSha256
});

/** A measurement that gives no result: the first gate not met says why. */
function ungraded(
  request: DecideRequest,
  gates: readonly QualityGate[],
  axis: Decision['axis'],
  readNotes: readonly string[]
): Decision {
  const failed = gates.find((gate) => !gate.met) as QualityGate;
  const criteria: CriterionResult[] = [];
  return {
    ...identityOf(request),
    verdict: 'invalid',
    nearLimit: false,
    gates,
    criteria,
    scores: null,
    axis,
    explanation: explainGate(failed),
    readNotes
  };
}

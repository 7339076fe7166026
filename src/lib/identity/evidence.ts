import { readSpectrumFile } from '../spectra/formats/formats';
import { StepRefusal } from '../spectra/preprocess/step';
import type { DecideRequest } from './decide';
import { measure } from './measure';
import { prepareMethod, prepareRivals } from './prepared';
import { correctAxis } from './variation';

/** What the plot of a scan shows, computed from the record whenever it is looked at. Plain arrays, JSON-able. */
export interface EvidenceView {
  readonly gridCm1: readonly number[];
  /** Baseline-corrected scan, scaled to the reference mean. */
  readonly scan: readonly number[];
  readonly mean: readonly number[];
  readonly low: readonly number[];
  readonly high: readonly number[];
  readonly residual: readonly number[];
  /** Name of the best other material, for those who may learn it. */
  readonly rival: { readonly name: string; readonly itemCode: string; readonly correlation: number } | null;
}

/** The view of a scan over its references, or null when the file does not reach that far. */
export function evidenceOf(request: DecideRequest): EvidenceView | null {
  const read = readSpectrumFile(request.bytes, request.readOptions);
  if (!read.ok) return null;
  const method = prepareMethod(request.method, request.methodSha256);
  const scan = correctAxis(
    read.spectrum,
    request.method.definition.correctAxis ? request.check.correction : null
  );
  try {
    const rivals = prepareRivals(method, request.methodSha256, request.library, request.materialId);
    const measured = measure(scan, method, rivals);
    const { display } = measured;
    const best = measured.rivals[0];
    const entry = best && rivals.entries[best.index];
    return {
      gridCm1: Array.from(method.display.gridCm1),
      scan: Array.from(display.scan),
      mean: Array.from(display.mean),
      low: Array.from(display.low),
      high: Array.from(display.high),
      residual: Array.from(display.residual),
      rival: entry ? { name: entry.name, itemCode: entry.itemCode, correlation: best.correlation } : null
    };
  } catch (error) {
    if (error instanceof StepRefusal) return null;
    throw error;
  }
}

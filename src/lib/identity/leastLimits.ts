import type { ClassModel } from '../spectra/model/classModel';
import { t2Limit } from '../spectra/model/limits';

/** From this many sources on, the references themselves say how lots differ. */
const ENOUGH_SOURCES = 12;
/** Part of a spectrum's sum of squares in which lots differ where too few were seen to know. */
const LEAST_Q_SHARE = 0.01;

/**
 * Few lots do not show how lots differ, and limits set by them alone turn the next genuine lot away. Where fewer than
 * twelve were seen, Q allows at least one hundredth of the spectrum (band heights that differ by a tenth), and T2 at
 * least what twelve lots would allow.
 */
export function withLeastLimits(model: ClassModel, sourceCount: number): ClassModel {
  if (sourceCount >= ENOUGH_SOURCES) return model;
  const { limits, loadings, mean } = model;
  const leastQ = LEAST_Q_SHARE * mean.reduce((sum, value) => sum + value * value, 0);
  const leastT2 = t2Limit('F, new object', ENOUGH_SOURCES, loadings.length, limits.significance);
  return { ...model, limits: { ...limits, q: Math.max(limits.q, leastQ), t2: Math.max(limits.t2, leastT2) } };
}

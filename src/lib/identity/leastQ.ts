import type { ClassModel } from '../spectra/model/classModel';

/** From this many sources on, the references themselves say how lots differ. */
const ENOUGH_SOURCES = 12;
/** Part of a spectrum's sum of squares in which lots differ where too few were seen to know. */
const LEAST_Q_SHARE = 0.01;

/**
 * Few lots do not show how lots differ, and a Q limit set by them alone turns the next genuine lot away. Where fewer
 * than twelve were seen, the limit allows at least one hundredth of the spectrum: band heights that differ by a tenth.
 */
export function withLeastQ(model: ClassModel, sourceCount: number): ClassModel {
  if (sourceCount >= ENOUGH_SOURCES) return model;
  const least = LEAST_Q_SHARE * model.mean.reduce((sum, value) => sum + value * value, 0);
  return { ...model, limits: { ...model.limits, q: Math.max(model.limits.q, least) } };
}

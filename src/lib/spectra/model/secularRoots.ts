/** The largest eigenpairs of a diagonal matrix less a rank-one matrix. */
export interface DowndatedPairs {
  /** Eigenvalues, descending. */
  readonly values: Float64Array;
  /** Row-major, values.length x size: unit eigenvectors as rows. */
  readonly vectors: Float64Array;
}

/**
 * The `count` largest eigenpairs of M = diag(poles) - rho z z', by the secular equation
 * f(mu) = 1 - rho sum z_j^2 / (pole_j - mu) = 0 (Golub 1973; Bunch, Nielsen & Sorensen, Numer. Math. 31:31,
 * 1978). Each root lies between two neighbouring poles; it is sought as a distance from the nearer one, so
 * that the differences pole_j - mu, on which the eigenvectors rest, keep full relative accuracy.
 * Poles that z does not touch, and poles that coincide, are set aside first (deflation).
 *
 * @param poles descending
 * @param rho at least 0
 */
export function downdatedPairs(
  poles: Float64Array,
  z: Float64Array,
  rho: number,
  count: number
): DowndatedPairs {
  const size = poles.length;
  const problem = deflate(poles, z, rho);
  const pairs: { value: number; vector: Float64Array }[] = problem.untouched.map((index) => ({
    value: poles[index],
    vector: unitAt(index, size)
  }));
  const roots = Math.min(problem.active.length, count);
  for (let k = 0; k < roots; k++) pairs.push(rootBelow(problem, k, rho, size));
  pairs.sort((a, b) => b.value - a.value);
  const kept = Math.min(count, pairs.length);
  const values = new Float64Array(kept);
  const vectors = new Float64Array(kept * size);
  for (let k = 0; k < kept; k++) {
    values[k] = pairs[k].value;
    undoRotations(pairs[k].vector, problem.rotations);
    vectors.set(pairs[k].vector, k * size);
  }
  return { values, vectors };
}

interface Rotation {
  readonly first: number;
  readonly second: number;
  readonly c: number;
  readonly s: number;
}

interface Deflated {
  /** Positions (in the full order) of the poles that remain coupled, and their poles and z. */
  readonly active: readonly number[];
  readonly poles: Float64Array;
  readonly z: Float64Array;
  readonly untouched: readonly number[];
  readonly rotations: readonly Rotation[];
}

function deflate(poles: Float64Array, original: Float64Array, rho: number): Deflated {
  const z = Float64Array.from(original);
  const tolerance = 4 * Number.EPSILON * Math.max(Math.abs(poles[0]), Math.abs(poles[poles.length - 1]));
  let squares = 0;
  for (let j = 0; j < z.length; j++) squares += z[j] * z[j];
  const reach = rho * Math.sqrt(squares);
  const active: number[] = [];
  const untouched: number[] = [];
  const rotations: Rotation[] = [];
  for (let j = 0; j < poles.length; j++) {
    if (reach * Math.abs(z[j]) <= tolerance) {
      untouched.push(j);
      continue;
    }
    const last = active.length === 0 ? -1 : active[active.length - 1];
    if (last < 0 || poles[last] - poles[j] > tolerance) {
      active.push(j);
      continue;
    }
    // Two equal poles: turn their plane so that only one of them still sees z.
    const length = Math.sqrt(z[last] * z[last] + z[j] * z[j]);
    rotations.push({ first: last, second: j, c: z[last] / length, s: z[j] / length });
    z[last] = length;
    z[j] = 0;
    untouched.push(j);
  }
  return {
    active,
    poles: Float64Array.from(active, (j) => poles[j]),
    z: Float64Array.from(active, (j) => z[j]),
    untouched,
    rotations
  };
}

/** The root between active pole k and the next one (or below the last), with its eigenvector. */
function rootBelow(
  problem: Deflated,
  k: number,
  rho: number,
  size: number
): { value: number; vector: Float64Array } {
  const { poles, z, active } = problem;
  let squares = 0;
  for (let j = 0; j < z.length; j++) squares += z[j] * z[j];
  const gap = k + 1 < poles.length ? poles[k] - poles[k + 1] : rho * squares;
  const isLast = k + 1 === poles.length;
  // f falls from +infinity just above the lower pole to -infinity just below the upper one.
  const fromUpper = isLast || secular(poles, z, rho, poles[k], -gap / 2) > 0;
  const origin = fromUpper ? poles[k] : poles[k + 1];
  const offset = fromUpper
    ? bracketedRoot((t) => secular(poles, z, rho, origin, -t), 0, isLast ? gap : gap / 2, -1)
    : bracketedRoot((t) => secular(poles, z, rho, origin, t), 0, gap / 2, 1);
  const shift = fromUpper ? -offset : offset;
  const vector = new Float64Array(size);
  let length = 0;
  for (let j = 0; j < poles.length; j++) {
    const value = z[j] / (poles[j] - origin - shift);
    vector[active[j]] = value;
    length += value * value;
  }
  length = Math.sqrt(length);
  for (let j = 0; j < active.length; j++) vector[active[j]] /= length;
  return { value: origin + shift, vector };
}

function secular(poles: Float64Array, z: Float64Array, rho: number, origin: number, shift: number): number {
  let sum = 0;
  for (let j = 0; j < poles.length; j++) sum += (z[j] * z[j]) / (poles[j] - origin - shift);
  return 1 - rho * sum;
}

/**
 * Root of a function of the distance t from a pole at t = 0, where it goes to infinity with the sign
 * `poleSign`; it has the other sign (or is zero) at `far`. Works on t f(t), which is finite at the pole, by
 * false position with the Illinois weight, and falls back to halving when that stalls.
 */
function bracketedRoot(f: (t: number) => number, near: number, far: number, poleSign: 1 | -1): number {
  let low = near;
  let high = far;
  let gHigh = high * f(high) * poleSign;
  if (gHigh > 0) return high;
  let lowIsKnown = false;
  let gLow = 0;
  let side = 0;
  for (let step = 0; step < 200; step++) {
    const wide = high - low;
    let t = lowIsKnown ? low + (wide * gLow) / (gLow - gHigh) : low + wide / 2;
    if (!(t > low && t < high) || step % 12 === 11) t = low + wide / 2;
    if (t <= low || t >= high || wide <= Number.EPSILON * high) return t;
    const g = t * f(t) * poleSign;
    if (g === 0) return t;
    if (g > 0) {
      if (side === 1) gHigh /= 2;
      low = t;
      gLow = g;
      lowIsKnown = true;
      side = 1;
    } else {
      if (side === -1) gLow /= 2;
      high = t;
      gHigh = g;
      side = -1;
    }
  }
  return low + (high - low) / 2;
}

function unitAt(index: number, size: number): Float64Array {
  const vector = new Float64Array(size);
  vector[index] = 1;
  return vector;
}

function undoRotations(vector: Float64Array, rotations: readonly Rotation[]): void {
  for (let r = rotations.length - 1; r >= 0; r--) {
    const { first, second, c, s } = rotations[r];
    const a = vector[first];
    const b = vector[second];
    vector[first] = c * a - s * b;
    vector[second] = s * a + c * b;
  }
}

/**
 * e^x from basic arithmetic only. ECMAScript leaves the last bit of Math.exp to the engine; replay of a stored
 * decision must give the same bits in every browser and server, and + - * / of IEEE 754 doubles do.
 *
 * x = k ln 2 + r with |r| <= ln 2 / 2; e^r by its Taylor series to r^13 (the first term left out is below 5e-18,
 * a fiftieth of the last bit); times 2^k from a table of exact powers. Within 1 unit of the last place of the true
 * value for normal results.
 */
export function deterministicExp(x: number): number {
  if (x > OVERFLOW) return Infinity;
  if (x < UNDERFLOW) return 0;
  if (x !== x) return x;
  const k = Math.floor(x * LOG2_E + 0.5);
  const r = x - k * LN2_HIGH - k * LN2_LOW;
  const r2 = r * r;
  const r4 = r2 * r2;
  // Pairs of neighbouring terms first (Estrin's order): fewer operations wait for one another than in Horner's.
  const low = C2 + r * C3 + r2 * (C4 + r * C5);
  const middle = C6 + r * C7 + r2 * (C8 + r * C9);
  const high = C10 + r * C11 + r2 * (C12 + r * C13);
  const rest = r2 * (low + r4 * (middle + r4 * high));
  const value = 1 + (r + rest);
  if (k >= -1022 && k <= 1023) return value * POWERS_OF_TWO[k - LEAST_POWER];
  // Next to overflow or underflow 2^k itself is no normal number: scale in two goes.
  const first = k > 0 ? 1023 : -1022;
  return value * POWERS_OF_TWO[k - first - LEAST_POWER] * POWERS_OF_TWO[first - LEAST_POWER];
}

/** ln of the largest double, and of half the smallest. */
const OVERFLOW = 709.782712893384;
const UNDERFLOW = -745.1332191019412;
const LOG2_E = 1.4426950408889634;
/** ln 2 in two parts: the first has 32 trailing zero bits, so k times it is exact. */
const LN2_HIGH = 0.6931471803691238;
const LN2_LOW = 1.9082149292705877e-10;

/** 1 / n! */
const C2 = 1 / 2;
const C3 = 1 / 6;
const C4 = 1 / 24;
const C5 = 1 / 120;
const C6 = 1 / 720;
const C7 = 1 / 5040;
const C8 = 1 / 40320;
const C9 = 1 / 362880;
const C10 = 1 / 3628800;
const C11 = 1 / 39916800;
const C12 = 1 / 479001600;
const C13 = 1 / 6227020800;

const LEAST_POWER = -1022;
/** 2^-1022 … 2^1023 by doubling and halving, which is exact. */
const POWERS_OF_TWO = powersOfTwo();

function powersOfTwo(): Float64Array {
  const powers = new Float64Array(1023 - LEAST_POWER + 1);
  powers[-LEAST_POWER] = 1;
  for (let k = 1; k <= 1023; k++) powers[k - LEAST_POWER] = powers[k - 1 - LEAST_POWER] * 2;
  for (let k = -1; k >= LEAST_POWER; k--) powers[k - LEAST_POWER] = powers[k + 1 - LEAST_POWER] / 2;
  return powers;
}

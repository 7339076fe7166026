import { execFileSync, spawnSync } from 'node:child_process';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { sgg } from 'ml-savitzky-golay-generalized';
import {
  matrixCholeskySolver,
  xMean,
  xMedianAbsoluteDeviation,
  xStandardDeviation,
  xSubtract,
  xWhittakerSmoother,
  xyInterpolateLinear
} from 'ml-spectra-processing';
import { bench, describe } from 'vitest';
import { resampleGrid } from '$lib/spectra/preprocess/resample';
import { applySteps, STEPS, stepSpec } from '$lib/spectra/preprocess/steps';
import type { Spectrum } from '$lib/spectra/spectrum';
import { lorentzians } from '../support/madeSpectra';
import { relativeDistance } from '../support/preprocessCurve';
import { median } from '../support/rounds';

const ROUNDS = 7;
/** Runs in one round, so chosen that each contender works for about a tenth of a second. */
const RUNS = { whole: 720, cholesky: 24, smoother: 72, scipy: 72 };
const LAMBDA = 1e5;
const grid = { fromCm1: 200, toCm1: 2000, stepCm1: 1 };
const gridCm1 = resampleGrid(grid);
const recipe = [
  stepSpec('despike'),
  stepSpec('resample', grid),
  stepSpec('asymmetric-least-squares', { lambda: LAMBDA }),
  stepSpec('savitzky-golay'),
  stepSpec('snv')
];

/** Different noise each time: on one scan over and over the processor learns its branches by heart. */
const scans: readonly Spectrum[] = Array.from({ length: 24 }, (_, seed) => {
  const { shiftCm1, intensity } = lorentzians(
    { from: 190, to: 2010, step: 0.97 },
    [357, 477, 851, 1086, 1440].map((centreCm1, k) => ({
      centreCm1,
      height: 3000 - 400 * k,
      fwhmCm1: 8 + k
    })),
    { sd: 25, seed: seed + 1 }
  );
  const background = (i: number) => 2000 + 1.5 * i - 0.0004 * i * i + (i === 700 ? 4000 : 0);
  return { shiftCm1, intensity: intensity.map((value, i) => value + background(i)) };
});

/** The same steps as the ml- packages offer them; their Whittaker smoother penalises first differences. */
function chained(
  { shiftCm1, intensity }: Spectrum,
  subtract: (y: Float64Array) => Float64Array
): Float64Array {
  const despiked = intensity.slice();
  const d = Float64Array.from({ length: intensity.length - 1 }, (_, i) => intensity[i + 1] - intensity[i]);
  const { median: middle, mad } = xMedianAbsoluteDeviation(d);
  for (let i = 5; i < d.length - 5; i++) {
    const leap = (at: number) => (0.6745 * (d[at] - middle)) / mad;
    if (!(Math.abs(leap(i - 1)) > 7 && Math.abs(leap(i)) > 7 && d[i - 1] > 0 !== d[i] > 0)) continue;
    if (Math.min(Math.abs(d[i - 1]), Math.abs(d[i])) < 3 * Math.max(Math.abs(d[i - 2]), Math.abs(d[i + 1])))
      continue;
    despiked[i] = xMean([...intensity.slice(i - 5, i), ...intensity.slice(i + 1, i + 6)]);
  }
  const y = xyInterpolateLinear({ x: shiftCm1, y: despiked }, gridCm1);
  const derivative = sgg(xSubtract(y, subtract(y)), 1, { windowSize: 15, polynomial: 2, derivative: 1 });
  const mean = xMean(derivative);
  const deviation = xStandardDeviation(derivative);
  return derivative.map((value) => (value - mean) / deviation);
}

/** Their Whittaker smoother, which penalises first differences and weighs by rules of its own: less work per round. */
const smoother = (maxIterations: number) => (y: Float64Array) =>
  xWhittakerSmoother(y, { lambda: LAMBDA, maxIterations, tolerance: 1e-6, learningRate: 0.5, factorStd: 3 });

const byTheirSmoother = (scan: Spectrum) => chained(scan, smoother(100));

/** Asymmetric least squares as published, put together from their sparse Cholesky solver. */
function asymmetricByCholesky(y: Float64Array): Float64Array {
  const n = y.length;
  let weights = new Float64Array(n).fill(1);
  for (;;) {
    const system: number[][] = [];
    for (let i = 0; i < n; i++) {
      const edge = Math.min(i, n - 1 - i);
      system.push([i, i, weights[i] + LAMBDA * (edge === 0 ? 1 : edge === 1 ? 5 : 6)]);
      if (i + 1 < n) system.push([i, i + 1, LAMBDA * (i === 0 || i === n - 2 ? -2 : -4)]);
      if (i + 2 < n) system.push([i, i + 2, LAMBDA]);
    }
    const solve = matrixCholeskySolver(system, n);
    if (solve === null) throw new Error('The system has no Cholesky factor.');
    const z = Float64Array.from(solve(y.map((value, i) => value * weights[i])));
    const next = y.map((value, i) => (value > z[i] ? 0.01 : 0.99));
    if (next.every((weight, i) => weight === weights[i])) return z;
    weights = next;
  }
}

/** Median time of one run, over scans in turn. */
function timed(run: (scan: Spectrum) => unknown, runs: number): number {
  const times: number[] = [];
  for (let i = 0; i < runs; i++) {
    const start = performance.now();
    run(scans[i % scans.length]);
    times.push(performance.now() - start);
  }
  return median(times);
}

const python = join(dirname(fileURLToPath(import.meta.url)), 'preprocessScipy.py');
const input = JSON.stringify({
  x: [...scans[0].shiftCm1],
  scans: scans.map(({ intensity }) => [...intensity]),
  grid: [...gridCm1],
  runs: RUNS.scipy
});

function scipy(): { medianMs: number; result: number[] } {
  const printed = execFileSync('python3', [python], { input, encoding: 'utf8', maxBuffer: 1 << 24 });
  return JSON.parse(printed) as { medianMs: number; result: number[] };
}

/** Alternating rounds, so that a machine that slows down does so for all; ratios are taken within a round. */
function race(): void {
  const hasScipy = spawnSync('python3', ['-c', 'import numpy, scipy']).status === 0;
  if (!hasScipy) console.log('scipy skipped: python3 with numpy and scipy is not on this machine');
  const whole = (scan: Spectrum) => applySteps(scan, recipe);
  const cholesky = (scan: Spectrum) => chained(scan, asymmetricByCholesky);
  const contenders: { name: string; goal?: number; measure: () => number }[] = [
    { name: 'this recipe', measure: () => timed(whole, RUNS.whole) },
    {
      name: 'ml- packages, the same baseline by their solver',
      goal: 0.05,
      measure: () => timed(cholesky, 6)
    },
    {
      name: 'ml- packages, their first-difference smoother',
      measure: () => timed(byTheirSmoother, RUNS.smoother)
    }
  ];
  if (hasScipy) contenders.push({ name: 'numpy and scipy', goal: 0.1, measure: () => scipy().medianMs });
  contenders.forEach(({ measure }) => measure());
  const times = contenders.map(() => [] as number[]);
  for (let round = 0; round < ROUNDS; round++) {
    contenders.forEach(({ measure }, k) => times[k].push(measure()));
  }
  console.log(`whole recipe, ${gridCm1.length} points, ${ROUNDS} alternating rounds`);
  contenders.forEach(({ name, goal }, k) => {
    const ratio = median(times[k].map((time, round) => times[0][round] / time));
    const against = k === 0 ? '' : `; this recipe takes ${ratio.toFixed(3)} of it`;
    const judged = goal === undefined ? '' : ` (goal ${goal}: ${ratio <= goal ? 'met' : 'not met'})`;
    console.log(`  ${name}: ${median(times[k]).toFixed(3)} ms${against}${judged}`);
  });
  if (hasScipy) {
    const ours = whole(scans[0]).intensity;
    const apart = (theirs: ArrayLike<number>) => relativeDistance(ours, theirs).toExponential(1);
    console.log(
      `  largest difference from scipy ${apart(scipy().result)}, from the ml- solver ${apart(cholesky(scans[0]))}`
    );
  }
}

describe('preprocessing one spectrum', () => {
  race();
  bench('whole recipe', () => void applySteps(scans[0], recipe));
  const onGrid = applySteps(scans[0], recipe.slice(0, 2));
  for (const step of STEPS) {
    if (step.kind === 'range') continue;
    const spec = step.name === 'resample' ? recipe[1] : stepSpec(step.name);
    const from = step.kind === 'despike' || step.kind === 'grid' ? scans[0] : onGrid;
    bench(step.title, () => void applySteps(from, [spec], [onGrid]));
  }
});

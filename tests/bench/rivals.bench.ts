import { bench, describe } from 'vitest';
import { centredUnit } from '$lib/spectra/compare/correlation';
import { bestRivals, packRivals, type RivalMatrix } from '$lib/spectra/compare/rivals';
import { seededRandom } from '$lib/spectra/statistics/seededRandom';
import { alternate, report } from '../support/rounds';

const POINTS = 1801;

/** Best correlation by the plainest loop there is: rows one after the other in one array, one sum each. */
function plainBest(scan: Float64Array, rows: Float64Array): number {
  const unit = centredUnit(scan);
  if (unit === null) return 0;
  let best = -Infinity;
  for (let start = 0; start < rows.length; start += POINTS) {
    let sum = 0;
    for (let i = 0; i < POINTS; i++) sum += unit[i] * rows[start + i];
    if (sum > best) best = sum;
  }
  return best;
}

/** Reads every number once in eight independent sums: what this machine's memory gives a JavaScript loop. */
function readAll(values: Float64Array): number {
  const sums = new Float64Array(8);
  let [a, b, c, d, e, f, g, h] = sums;
  for (let i = 0; i + 8 <= values.length; i += 8) {
    a += values[i];
    b += values[i + 1];
    c += values[i + 2];
    d += values[i + 3];
    e += values[i + 4];
    f += values[i + 5];
    g += values[i + 6];
    h += values[i + 7];
  }
  return a + b + c + d + e + f + g + h;
}

function library(count: number): { matrix: RivalMatrix; rows: Float64Array } {
  const random = seededRandom(count);
  const spectra = Array.from({ length: count }, () => Float64Array.from({ length: POINTS }, () => random()));
  const rows = new Float64Array(count * POINTS);
  spectra.forEach((spectrum, k) => rows.set(centredUnit(spectrum) ?? spectrum, k * POINTS));
  return { matrix: packRivals(spectra), rows };
}

function race(count: number): void {
  const { matrix, rows } = library(count);
  const random = seededRandom(99);
  const scan = Float64Array.from({ length: POINTS }, () => random());
  const same = plainBest(scan, rows) === bestRivals(scan, matrix, 1)[0].correlation;
  const timings = alternate(
    [
      { name: 'plain loop', run: () => void plainBest(scan, rows) },
      { name: 'bestRivals', run: () => void bestRivals(scan, matrix, 5) },
      { name: 'reading the library once', run: () => void readAll(rows) }
    ],
    15
  );
  const speed = (index: number) => (rows.byteLength / 1e6 / timings[index].medianMs).toFixed(1);
  console.log(
    report(`best rival of ${count} x ${POINTS} (${(rows.byteLength / 1e6).toFixed(0)} MB)`, timings)
  );
  console.log(`  same bits as the plain loop: ${same}; GB/s: bestRivals ${speed(1)}, reading ${speed(2)}`);
}

describe('best rival among a library', () => {
  race(1_000);
  race(10_000);
  const { matrix, rows } = library(1_000);
  const scan = Float64Array.from(rows.subarray(0, POINTS));
  bench('bestRivals, 1,000 references', () => void bestRivals(scan, matrix, 5));
  bench('plain loop, 1,000 references', () => void plainBest(scan, rows));
});

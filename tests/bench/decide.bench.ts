import { bench, describe } from 'vitest';
import { decide } from '$lib/identity/decide';
import type { LibraryEntry } from '$lib/identity/method';
import { seededRandom } from '$lib/spectra/statistics/seededRandom';
import { INSTRUMENTS } from '../../scripts/demo/scenario';
import { synthesise } from '../../scripts/demo/synthesise';
import { makeLibraryEntry } from '$lib/identity/library';
import { asFile, libraryOf, madeMethod, madeScan, requestFor } from '../support/madeMethods';
import { median } from '../support/rounds';

const MATERIALS = 1_000;
const DECISIONS = 100_000;
/** What one decision may take on the machine that runs this, ms. */
const GOAL_MS = 10;

/** An invented material: a dozen bands anywhere. */
function inventedEntry(k: number): LibraryEntry {
  const random = seededRandom(k + 1);
  const bands = Array.from({ length: 12 }, () => ({
    shiftCm1: 250 + 1500 * random(),
    relativeHeight: 0.1 + 0.9 * random(),
    fwhmCm1: 6 + 14 * random()
  }));
  const spectrum = synthesise(bands, INSTRUMENTS[0], { lotSeed: `bench ${k}`, scanSeed: `bench ${k}` });
  return makeLibraryEntry({ materialId: `bench-${k}`, itemCode: `B${k}`, name: `Bench ${k}` }, [spectrum]);
}

describe(`one decision against ${MATERIALS} materials`, () => {
  const made = madeMethod('LAC-M');
  const others = Array.from({ length: MATERIALS - 1 }, (_, k) => inventedEntry(k));
  const library = libraryOf([made.entry, ...others]);
  const scans = Array.from({ length: 8 }, (_, k) => asFile(madeScan('LAC-M', { scanSeed: `bench ${k}` })));
  const requests = scans.map((bytes) => requestFor(made, library, bytes));

  const started = performance.now();
  decide(requests[0]);
  console.log(
    `first decision, library and method made ready: ${(performance.now() - started).toFixed(0)} ms`
  );

  const times = Array.from({ length: 200 }, (_, i) => {
    const start = performance.now();
    decide(requests[i % requests.length]);
    return performance.now() - start;
  });
  const sorted = [...times].sort((a, b) => a - b);
  const middle = median(times);
  console.log(
    `one decision: median ${middle.toFixed(2)} ms, 95th percentile ${sorted[Math.floor(0.95 * sorted.length)].toFixed(2)} ms; goal ${GOAL_MS} ms ${middle < GOAL_MS ? 'reached' : 'NOT reached'}`
  );

  bench('decide', () => void decide(requests[0]));
});

describe(`memory over ${DECISIONS} decisions`, () => {
  const made = madeMethod('CAC');
  const library = libraryOf([made.entry, madeMethod('SHC').entry]);
  const requests = Array.from({ length: 4 }, (_, k) =>
    requestFor(made, library, asFile(madeScan('CAC', { scanSeed: `memory ${k}` })))
  );
  const heldMb = (): number => {
    globalThis.gc?.();
    const { heapUsed, arrayBuffers } = process.memoryUsage();
    return (heapUsed + arrayBuffers) / 1e6;
  };
  const readings: number[] = [];
  const started = performance.now();
  for (let i = 0; i < DECISIONS; i++) {
    decide(requests[i % requests.length]);
    if (i % (DECISIONS / 10) === DECISIONS / 20) readings.push(heldMb());
  }
  const seconds = (performance.now() - started) / 1000;
  const half = readings.length / 2;
  const growth = median(readings.slice(half)) - median(readings.slice(0, half));
  console.log(
    `${DECISIONS} decisions in ${seconds.toFixed(0)} s; held memory, MB: ${readings.map((mb) => mb.toFixed(0)).join(' ')}; second half over first: ${growth.toFixed(1)} MB${globalThis.gc ? '' : ' (no forced collection)'}`
  );
  bench('decide, two materials', () => void decide(requests[0]));
});

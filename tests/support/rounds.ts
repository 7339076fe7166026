/** One contender of a race: a name and the work. */
export interface Contender {
  readonly name: string;
  run(): void;
}

export interface Timing {
  readonly name: string;
  readonly medianMs: number;
  /** Median over rounds of this contender's time divided by the first one's in the same round. */
  readonly ratio: number;
}

/**
 * Times contenders in alternating rounds, so that a machine that slows down or speeds up does so for all of
 * them. Three rounds of each go before the clock starts. Ratios are taken within a round, then their median.
 */
export function alternate(contenders: readonly Contender[], rounds = 7): Timing[] {
  const times = contenders.map(() => [] as number[]);
  for (let round = -3; round < rounds; round++) {
    contenders.forEach((contender, k) => {
      const start = performance.now();
      contender.run();
      const took = performance.now() - start;
      if (round >= 0) times[k].push(took);
    });
  }
  return contenders.map(({ name }, k) => ({
    name,
    medianMs: median(times[k]),
    ratio: median(times[k].map((time, round) => time / times[0][round]))
  }));
}

export function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2;
}

/** The lines a bench prints: medians, and ratios to the first contender. */
export function report(title: string, timings: readonly Timing[]): string {
  const lines = timings.map(
    ({ name, medianMs, ratio }) => `  ${name}: ${medianMs.toFixed(3)} ms, ${ratio.toFixed(3)} of the first`
  );
  return [title, ...lines].join('\n');
}

import { clopperPearson, type ExactInterval } from '../../src/lib/spectra/statistics/clopperPearson';
import type { Trial } from './trials';

/** A count out of a total with its exact 95 % interval. */
export interface Rate {
  readonly count: number;
  readonly of: number;
  readonly rate: number;
  readonly interval: ExactInterval;
}

export interface Figures {
  readonly spectra: number;
  readonly materials: number;
  /** Spectra a quality gate turned away under their own material, by gate. */
  readonly noResult: Readonly<Record<string, number>>;
  /** Genuine material passed, of all genuine trials and of those with a result. */
  readonly passedOwn: Rate | null;
  readonly passedOwnOfJudged: Rate | null;
  /** Genuine material failed outright ("cannot tell" and "no result" are not failures). */
  readonly failedOwn: Rate | null;
  /** Other material not passed. */
  readonly refusedOther: Rate | null;
  /** Of all methods, the own material's has the highest lead: of judged spectra and of all (no result counts against). */
  readonly bestMatch: Rate | null;
  readonly bestMatchOfAll: Rate | null;
  /** Under its own method no other material agrees better. */
  readonly ownAhead: Rate | null;
  /** Equal error rate by lead over the best other material, and by correlation alone. */
  readonly equalErrorByLead: number | null;
  readonly equalErrorByCorrelation: number | null;
  readonly falseAccepts: readonly Trial[];
  readonly ownNotPassed: readonly Trial[];
  readonly confused: readonly {
    readonly material: string;
    readonly takenFor: string;
    readonly count: number;
  }[];
  readonly medianMilliseconds: number;
}

const CONFIDENCE = 0.95;

/** Sums trials up. */
export function figuresOf(trials: readonly Trial[]): Figures {
  const own = trials.filter((trial) => trial.material === trial.claimed);
  const other = trials.filter((trial) => trial.material !== trial.claimed);
  const judged = own.filter((trial) => trial.correlation !== null);
  const best = bestMatches(trials);
  const right = best.filter((entry) => entry.bestMatch === entry.material);
  const times = trials.map((trial) => trial.milliseconds).sort((a, b) => a - b);
  return {
    spectra: new Set(trials.map((trial) => trial.file)).size,
    materials: new Set(trials.map((trial) => trial.claimed)).size,
    noResult: tally(
      own.filter((trial) => trial.verdict === 'invalid').map((trial) => String(trial.decidedBy))
    ),
    passedOwn: rate(count(own, 'pass'), own.length),
    passedOwnOfJudged: rate(count(judged, 'pass'), judged.length),
    failedOwn: rate(count(own, 'fail'), own.length),
    refusedOther: rate(other.length - count(other, 'pass'), other.length),
    bestMatch: rate(right.length, best.length),
    bestMatchOfAll: rate(right.length, own.length),
    ownAhead: rate(judged.filter((trial) => trial.lead !== null && trial.lead > 0).length, judged.length),
    equalErrorByLead: equalError(trials, (trial) => trial.lead),
    equalErrorByCorrelation: equalError(trials, (trial) => trial.correlation),
    falseAccepts: other.filter((trial) => trial.verdict === 'pass'),
    ownNotPassed: own.filter((trial) => trial.verdict !== 'pass'),
    confused: confusions(best),
    medianMilliseconds: times.length === 0 ? NaN : times[times.length >> 1]
  };
}

const count = (trials: readonly Trial[], verdict: Trial['verdict']): number =>
  trials.filter((trial) => trial.verdict === verdict).length;

const rate = (hits: number, of: number): Rate | null =>
  of === 0 ? null : { count: hits, of, rate: hits / of, interval: clopperPearson(hits, of, CONFIDENCE) };

interface BestMatch {
  readonly material: string;
  readonly bestMatch: string;
}

/** The material of highest lead for each spectrum that was judged under its own material. */
function bestMatches(trials: readonly Trial[]): BestMatch[] {
  const byFile = new Map<string, Trial[]>();
  for (const trial of trials) byFile.set(trial.file, [...(byFile.get(trial.file) ?? []), trial]);
  return [...byFile.values()].flatMap((group) => {
    const scored = group.filter((trial) => trial.lead !== null);
    if (!scored.some((trial) => trial.material === trial.claimed)) return [];
    const best = scored.reduce((a, b) => (Number(b.lead) > Number(a.lead) ? b : a));
    return [{ material: best.material, bestMatch: best.claimed }];
  });
}

function confusions(best: readonly BestMatch[]): Figures['confused'] {
  const wrong = best.filter((entry) => entry.bestMatch !== entry.material);
  const counts = tally(wrong.map((entry) => `${entry.material}\t${entry.bestMatch}`));
  return Object.entries(counts)
    .map(([pair, times]) => {
      const [material, takenFor] = pair.split('\t');
      return { material, takenFor, count: times };
    })
    .sort((a, b) => b.count - a.count);
}

function tally(words: readonly string[]): Record<string, number> {
  const counts: Record<string, number> = {};
  for (const word of words) counts[word] = (counts[word] ?? 0) + 1;
  return counts;
}

/** The rate at which a threshold on the score turns away as much genuine as it lets through foreign material. */
export function equalError(
  trials: readonly Trial[],
  scoreOf: (trial: Trial) => number | null
): number | null {
  const scores = (genuine: boolean) =>
    trials
      .filter((trial) => (trial.material === trial.claimed) === genuine)
      .map(scoreOf)
      .filter((score) => score !== null)
      .sort((a, b) => a - b);
  const genuine = scores(true);
  const foreign = scores(false);
  if (genuine.length === 0 || foreign.length === 0) return null;
  let closest = { apart: Infinity, error: NaN };
  for (const threshold of [...genuine, ...foreign]) {
    const rejected = genuine.filter((score) => score < threshold).length / genuine.length;
    const accepted = foreign.filter((score) => score >= threshold).length / foreign.length;
    const apart = Math.abs(rejected - accepted);
    if (apart < closest.apart) closest = { apart, error: (rejected + accepted) / 2 };
  }
  return closest.error;
}

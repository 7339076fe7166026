import { clopperPearson } from '../../src/lib/spectra/statistics/clopperPearson';
import type { Trial } from './leaveOut';

export interface Rate {
  readonly count: number;
  readonly of: number;
  readonly rate: number | null;
  /** Exact two-sided 95 % bounds (Clopper & Pearson). */
  readonly low: number | null;
  readonly high: number | null;
}

export interface Figures {
  /** Genuine spectra that passed. */
  readonly sensitivity: Rate;
  /** Genuine spectra refused as another material: an inconclusive or invalid measurement is no refusal. */
  readonly falseRejects: Rate;
  readonly genuineInconclusive: Rate;
  readonly genuineInvalid: Rate;
  /** Spectra of another material that did not pass. */
  readonly specificity: Rate;
  readonly falseAccepts: readonly string[];
  /** Spectra whose own material correlates best of all. */
  readonly bestMatch: Rate;
  /** Where as many genuine spectra lie below a correlation threshold as strangers reach it. */
  readonly equalErrorRate: number | null;
  readonly confused: readonly { readonly pair: string; readonly count: number }[];
  readonly refusedBy: Readonly<Record<string, number>>;
  readonly medianMs: number;
}

export function rate(count: number, of: number): Rate {
  if (of === 0) return { count, of, rate: null, low: null, high: null };
  return { count, of, rate: count / of, ...clopperPearson(count, of, 0.95) };
}

export function figuresOf(trials: readonly Trial[]): Figures {
  const genuine = trials.filter((trial) => trial.truth === trial.claimed);
  const strange = trials.filter((trial) => trial.truth !== trial.claimed);
  const having = (verdict: string) => genuine.filter((trial) => trial.decision.verdict === verdict).length;
  const accepted = strange.filter((trial) => trial.decision.verdict === 'pass');
  const refusedBy: Record<string, number> = {};
  for (const { decision } of genuine) {
    if (decision.verdict === 'pass') continue;
    const why = `${decision.verdict}: ${decision.explanation.decidedBy ?? ''}`;
    refusedBy[why] = (refusedBy[why] ?? 0) + 1;
  }
  const times = trials.map((trial) => trial.tookMs).sort((a, b) => a - b);
  return {
    sensitivity: rate(having('pass'), genuine.length),
    falseRejects: rate(having('fail'), genuine.length),
    genuineInconclusive: rate(having('inconclusive'), genuine.length),
    genuineInvalid: rate(having('invalid'), genuine.length),
    specificity: rate(strange.length - accepted.length, strange.length),
    falseAccepts: accepted.map((trial) => `${trial.path} as ${trial.claimed}`),
    ...bestMatches(trials),
    equalErrorRate: equalErrorRate(genuine.map(scoreOf), strange.map(scoreOf)),
    refusedBy,
    medianMs: times[times.length >> 1] ?? 0
  };
}

const scoreOf = (trial: Trial): number => trial.correlation ?? -1;

function bestMatches(trials: readonly Trial[]): Pick<Figures, 'bestMatch' | 'confused'> {
  const byPath = new Map<string, Trial[]>();
  for (const trial of trials) byPath.set(trial.path, [...(byPath.get(trial.path) ?? []), trial]);
  const confused = new Map<string, number>();
  let right = 0;
  let all = 0;
  for (const own of byPath.values()) {
    if (!own.some((trial) => trial.truth === trial.claimed)) continue;
    all++;
    const best = own.reduce((a, b) => (scoreOf(b) > scoreOf(a) ? b : a));
    if (best.claimed === best.truth) right++;
    else {
      const pair = `${best.truth} taken for ${best.claimed}`;
      confused.set(pair, (confused.get(pair) ?? 0) + 1);
    }
  }
  return {
    bestMatch: rate(right, all),
    confused: [...confused].map(([pair, count]) => ({ pair, count })).sort((a, b) => b.count - a.count)
  };
}

/** Mean of both error rates at the threshold where they differ least. */
export function equalErrorRate(genuine: readonly number[], strange: readonly number[]): number | null {
  if (genuine.length === 0 || strange.length === 0) return null;
  let best = { gap: Infinity, error: 1 };
  for (const threshold of new Set([...genuine, ...strange])) {
    const rejects = genuine.filter((value) => value < threshold).length / genuine.length;
    const accepts = strange.filter((value) => value >= threshold).length / strange.length;
    const gap = Math.abs(rejects - accepts);
    if (gap < best.gap) best = { gap, error: (rejects + accepts) / 2 };
  }
  return best.error;
}

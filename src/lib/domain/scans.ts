import { z } from 'zod';
import type { CriterionCode, Decision, Verdict } from '../identity/decision';
import type { ContainerStatus } from './containers';
import { can, type Actor } from './roles';

/** What a scan's sender states besides the file. */
export const newScanSchema = z.object({
  scanId: z.string().uuid('The scan needs an id of its own (a UUID)'),
  barcode: z.string().max(4096),
  lotId: z.string().uuid().optional(),
  instrumentId: z.string().uuid('Choose the instrument'),
  repeatReason: z.string().trim().max(500).default(''),
  clientTime: z.iso.datetime({ offset: true }).optional(),
  sentLate: z.boolean().default(false),
  readOptions: z
    .strictObject({
      block: z.number().int().min(0).max(999).optional(),
      excitationNm: z.number().min(200).max(2000).optional(),
      axisUnit: z.enum(['cm-1', 'nm']).optional(),
      delimiter: z.enum([',', ';', '\t', ' ', '|']).optional(),
      decimalComma: z.boolean().optional(),
      axisColumn: z.number().int().min(0).max(999).optional(),
      intensityColumn: z.number().int().min(0).max(999).optional()
    })
    .default({})
});

export type NewScan = z.output<typeof newScanSchema>;

export interface ScanRuleFacts {
  readonly status: ContainerStatus;
  /** Verdicts so far, oldest first. */
  readonly verdicts: readonly Verdict[];
  /** Whether an approver's grant of a repeat waits to be used. */
  readonly grantOpen: boolean;
  /** Site's limit of measurements without a result. */
  readonly invalidLimit: number;
  readonly repeatReason: string;
}

/** Why the container may not be scanned now, or null when it may. No testing into compliance: see DEVELOPERS.md. */
export function scanRefusal(facts: ScanRuleFacts): string | null {
  if (facts.status === 'pass') return 'This container has already passed. Scan the next one.';
  if (facts.status === 'awaiting') {
    const repeats = facts.verdicts.length > 0;
    if (repeats && facts.repeatReason === '') return 'Say why the measurement is repeated.';
    return null;
  }
  if (facts.grantOpen) return facts.repeatReason === '' ? 'Say why the measurement is repeated.' : null;
  if (facts.status === 'fail') {
    return 'This container failed and is locked. Set it aside and call QA: only an approver can grant another scan.';
  }
  if (facts.status === 'inconclusive') {
    return 'The last scan could not tell. QA decides what happens next: ask for a repeat.';
  }
  return 'This container is set aside. QA decides what happens next: ask for a repeat.';
}

/** Status of the container once a scan has its verdict. */
export function statusAfter(verdict: Verdict, invalidSoFar: number, invalidLimit: number): ContainerStatus {
  if (verdict === 'pass' || verdict === 'fail' || verdict === 'inconclusive') return verdict;
  return invalidSoFar >= invalidLimit ? 'set_aside' : 'awaiting';
}

export const VERDICT_NAMES: Readonly<Record<Verdict, string>> = {
  pass: 'Pass',
  fail: 'Fail',
  inconclusive: 'Cannot tell',
  invalid: 'No result'
};

/**
 * The decision as this person may see it: operators learn that the label's claim is not met, not which other
 * material was the better match.
 */
export function decisionFor(actor: Pick<Actor, 'roles'>, decision: Decision): Decision {
  if (can(actor, 'scan.read-rivals')) return decision;
  return {
    ...decision,
    scores: decision.scores && { ...decision.scores, bestRivalCorrelation: null },
    criteria: decision.criteria.filter((criterion) => criterion.code !== 'best-match'),
    explanation: { ...decision.explanation, detail: decision.explanation.reason, rivals: [], mixture: [] }
  };
}

export const CRITERION_NAMES: Readonly<Record<CriterionCode, string>> = {
  correlation: 'Correlation with the reference mean',
  'hotelling-t2': 'Distance inside the class model (T2)',
  'q-residual': 'Distance from the class model (Q)',
  'best-match': 'Gap to the best other material',
  admixture: 'Share that looks like another material',
  'unexplained-bands': 'Largest band not expected',
  'missing-bands': 'Largest band missing'
};

import type { LotStatus } from './lots';

/** What must be known of a lot before it can be released. */
export interface ReleaseFacts {
  readonly status: LotStatus;
  readonly containersPlanned: number;
  readonly containersPassed: number;
  readonly containersBlocked: readonly number[];
  /** Numbers of planned containers whose passing scan had no valid instrument check. */
  readonly withoutCheck: readonly number[];
  readonly papers: number;
  readonly openDeviations: readonly string[];
  readonly openRepeats: number;
  readonly highRisk: boolean;
  readonly limitTest: 'complies' | 'does_not_comply' | null;
  readonly expiresOn: string | null;
  /** The site's date, `YYYY-MM-DD`. */
  readonly today: string;
  readonly methodWithdrawn: boolean;
  readonly scannedByIds: readonly string[];
  readonly signerId: string;
}

export interface ReleaseCondition {
  readonly code:
    | 'undecided'
    | 'all-scanned'
    | 'none-blocked'
    | 'method-stands'
    | 'instrument-fit'
    | 'papers'
    | 'no-open-deviation'
    | 'no-open-repeat'
    | 'limit-test'
    | 'not-expired'
    | 'second-person';
  readonly met: boolean;
  readonly sentence: string;
}

/** The conditions of release (DESIGN of the rules: DEVELOPERS.md), each with a sentence that says how it stands. */
export function releaseConditions(facts: ReleaseFacts): readonly ReleaseCondition[] {
  const plural = (count: number, noun: string) => `${count} ${noun}${count === 1 ? '' : 's'}`;
  const conditions: ReleaseCondition[] = [
    {
      code: 'undecided',
      met: facts.status !== 'released' && facts.status !== 'rejected',
      sentence:
        facts.status === 'released' || facts.status === 'rejected'
          ? `The lot is ${facts.status} already.`
          : 'The lot is not decided yet.'
    },
    {
      code: 'all-scanned',
      met: facts.containersPassed === facts.containersPlanned,
      sentence: `${facts.containersPassed} of ${plural(facts.containersPlanned, 'planned container')} passed.`
    },
    {
      code: 'none-blocked',
      met: facts.containersBlocked.length === 0,
      sentence:
        facts.containersBlocked.length === 0
          ? 'No container is failed, undecided or set aside.'
          : `Failed, undecided or set aside: container ${facts.containersBlocked.join(', ')}.`
    },
    {
      code: 'method-stands',
      met: !facts.methodWithdrawn,
      sentence: facts.methodWithdrawn
        ? 'The method version used has been withdrawn.'
        : 'The method version used has not been withdrawn.'
    },
    {
      code: 'instrument-fit',
      met: facts.withoutCheck.length === 0,
      sentence:
        facts.withoutCheck.length === 0
          ? 'Every passing scan was made on an instrument with a valid check.'
          : `No valid instrument check behind container ${facts.withoutCheck.join(', ')}.`
    },
    {
      code: 'papers',
      met: facts.papers > 0,
      sentence:
        facts.papers > 0
          ? `${plural(facts.papers, 'paper')} attached.`
          : 'No certificate of analysis is attached.'
    },
    {
      code: 'no-open-deviation',
      met: facts.openDeviations.length === 0,
      sentence:
        facts.openDeviations.length === 0
          ? 'No deviation is open.'
          : `Open: ${facts.openDeviations.join(', ')}.`
    },
    {
      code: 'no-open-repeat',
      met: facts.openRepeats === 0,
      sentence:
        facts.openRepeats === 0
          ? 'No request for a repeat is waiting.'
          : `${plural(facts.openRepeats, 'request')} for a repeat waiting.`
    },
    limitTestCondition(facts),
    {
      code: 'not-expired',
      met: facts.expiresOn === null || facts.expiresOn >= facts.today,
      sentence: facts.expiresOn === null ? 'No expiry date is stated.' : `Expires on ${facts.expiresOn}.`
    },
    {
      code: 'second-person',
      met: !facts.scannedByIds.includes(facts.signerId),
      sentence: facts.scannedByIds.includes(facts.signerId)
        ? 'You scanned this lot, so another approver must decide it.'
        : 'The signer did not scan this lot.'
    }
  ];
  return conditions;
}

function limitTestCondition(facts: ReleaseFacts): ReleaseCondition {
  const code = 'limit-test' as const;
  if (!facts.highRisk)
    return {
      code,
      met: true,
      sentence: 'No ethylene or diethylene glycol limit test is asked for this material.'
    };
  if (facts.limitTest === 'complies')
    return { code, met: true, sentence: 'The ethylene and diethylene glycol limit test complies.' };
  if (facts.limitTest === 'does_not_comply')
    return { code, met: false, sentence: 'The ethylene and diethylene glycol limit test does not comply.' };
  return {
    code,
    met: false,
    sentence:
      'The ethylene and diethylene glycol limit test result is missing: identity by Raman does not replace it.'
  };
}

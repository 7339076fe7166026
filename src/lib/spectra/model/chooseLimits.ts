import type { ClassLimits } from './classModel';
import { fewDistancesLimit } from './dataDriven';
import type { HeldOutDistances } from './leaveOneOut';
import { jacksonMudholkarLimit, t2Limit } from './limits';

/** What the choice of a limit's form depends on. */
export interface LimitEvidence {
  /** Sources (lots, instruments) the references come from: what counts as independent. */
  readonly sourceCount: number;
  readonly components: number;
  readonly residualEigenvalues: ArrayLike<number>;
  readonly heldOut: HeldOutDistances;
}

const T2_FORM = 'F, new object';
const Q_FORM = 'Jackson-Mudholkar';
const FEW_FORM = 'data-driven chi-squared, few references';

/**
 * Sets both limits of a class model, each in the form that holds what it promises at the size of the set.
 *
 * A model fits its own references more closely than the next lot, the more so the fewer there are. A limit
 * taken from the fitted references themselves therefore turns genuine material away: simulated with 8
 * references and 2 components, Jackson-Mudholkar at 1 % rejects 15 % of genuine new spectra, at 50 between 1 and 2 %.
 * So the theoretical forms are used where they are sound, judged by independent sources rather than replicates:
 * - T2: the F form for a new spectrum once sources exceed components by 10;
 * - Q: Jackson-Mudholkar from 25 sources per component, at least 30.
 * Below that, the data-driven scaled chi-squared form (Pomerantsev & Rodionova) is fitted to the distances of
 * references each judged by a model that has not seen its source, with allowance for their small number.
 */
export function chooseLimits(evidence: LimitEvidence, significance: number): ClassLimits {
  const { sourceCount, components, heldOut } = evidence;
  const fForm = sourceCount - components >= 10;
  const jacksonMudholkar = sourceCount >= Math.max(30, 25 * components);
  return {
    significance,
    t2: fForm
      ? t2Limit(T2_FORM, sourceCount, components, significance)
      : fewDistancesLimit(heldOut.t2, sourceCount, significance),
    t2Form: fForm ? T2_FORM : FEW_FORM,
    q: jacksonMudholkar
      ? jacksonMudholkarLimit(evidence.residualEigenvalues, significance).limit
      : fewDistancesLimit(heldOut.q, sourceCount, significance),
    qForm: jacksonMudholkar ? Q_FORM : FEW_FORM
  };
}

/** What a method owner must be told about a model built on little, in plain sentences. */
export function limitCautions(
  n: number,
  sourceCount: number,
  componentsWanted: number,
  components: number
): string[] {
  const cautions: string[] = [];
  if (sourceCount === 1) {
    cautions.push(
      'All references come from one source: the model has not seen how lots differ, and a genuine new lot may ' +
        'be rejected. Add references from other lots.'
    );
  } else if (sourceCount < 3) {
    cautions.push(
      `The references come from only ${sourceCount} sources: the spread between lots is hardly known. Add more lots.`
    );
  }
  if (n < 12) {
    cautions.push(
      `There are ${n} references: the limits are only roughly known, and genuine material may be rejected several ` +
        'times as often as the stated significance. Twelve or more from different lots are wanted.'
    );
  }
  if (n >= 2 * sourceCount && sourceCount > 1) {
    cautions.push(
      `Several references share a source: ${n} spectra count as ${sourceCount}, for replicates of one lot vouch for each other.`
    );
  }
  if (components < componentsWanted) {
    cautions.push(
      `The references carry ${components} of the ${componentsWanted} components asked for; the model keeps ${components}.`
    );
  }
  return cautions;
}

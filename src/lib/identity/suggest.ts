import { crossValidateComponents } from '../spectra/model/crossValidateComponents';
import { applySteps } from '../spectra/preprocess/steps';
import type { LabelledReference, MethodDefinition } from './method';
import { correlationAt, noiseCost, ratioFor } from './noiseBudget';
import { suggestMinCorrelation } from './suggestMinCorrelation';
import { suggestRecipe } from './suggestRecipe';

/** Most components suggested: more than this and a class model begins to explain contaminants too. */
const MOST_COMPONENTS = 6;

/** A scan of this signal-to-noise ratio should not miss the correlation limit for its noise alone. */
const FAINT_BUT_FAIR = 25;
/** Below this an agreement proves nothing; references that agree less with each other are no set of references. */
const LEAST_CORRELATION = 0.9;

export interface SuggestOptions {
  /** Scanned without liner or bag between: bands that a liner would cover may count. False by default. */
  readonly bare?: boolean;
}

/** A definition that suits ordinary powders and these references; a method owner starts from it. */
export function suggestDefinition(
  references: readonly LabelledReference[],
  excitationNm: number,
  { bare = false }: SuggestOptions = {}
): MethodDefinition {
  const draft: MethodDefinition = {
    excitationNm,
    excitationToleranceNm: 1,
    recipe: suggestRecipe(
      references.map((reference) => reference.spectrum),
      bare
    ),
    criteria: {
      minCorrelation: 0.9,
      guardBand: 0.02,
      significance: 0.01,
      components: 3,
      rivalGap: 0.02,
      minSignalToNoise: 15,
      maxUnexplainedBand: 0.12
    },
    correctAxis: true,
    shiftSearchCm1: 1,
    widthSearchCm1: 8
  };
  const sources = references.map((reference) => reference.source);
  const cost = noiseCost(
    references.map((reference) => reference.spectrum),
    draft.recipe
  );
  const minCorrelation = Math.max(
    LEAST_CORRELATION,
    Math.min(suggestMinCorrelation(draft, references), correlationAt(FAINT_BUT_FAIR, cost))
  );
  // A scan whose noise alone would take it below the limit is measured again, not failed.
  const minSignalToNoise = Math.max(
    draft.criteria.minSignalToNoise,
    Math.ceil(ratioFor(minCorrelation, cost))
  );
  let components = 3;
  if (largestLeavesEnough(sources)) {
    const rows = references.map((reference) => applySteps(reference.spectrum, draft.recipe).intensity);
    components = Math.max(
      3,
      Math.min(MOST_COMPONENTS, crossValidateComponents(rows, sources, MOST_COMPONENTS).suggested + 2)
    );
  }
  return { ...draft, criteria: { ...draft.criteria, minCorrelation, minSignalToNoise, components } };
}

/** With one source left out, at least four references must stay, or there is nothing to cross-validate. */
function largestLeavesEnough(sources: readonly string[]): boolean {
  const counts = new Map<string, number>();
  for (const source of sources) counts.set(source, (counts.get(source) ?? 0) + 1);
  return counts.size >= 2 && sources.length - Math.max(...counts.values()) >= 4;
}

import { crossValidateComponents } from '../spectra/model/crossValidateComponents';
import { DEFAULT_RECIPE } from '../spectra/preprocess/recipe';
import { applySteps } from '../spectra/preprocess/steps';
import { suggestMinCorrelation } from './fitMethod';
import type { LabelledReference, MethodDefinition } from './method';

/** Most components suggested: more than this and a class model begins to explain contaminants too. */
const MOST_COMPONENTS = 6;

/** A definition that suits ordinary powders and these references; a method owner starts from it. */
export function suggestDefinition(
  references: readonly LabelledReference[],
  excitationNm: number
): MethodDefinition {
  const draft: MethodDefinition = {
    excitationNm,
    excitationToleranceNm: 1,
    recipe: recipeFor(references),
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
    shiftSearchCm1: 1
  };
  const sources = references.map((reference) => reference.source);
  const minCorrelation = suggestMinCorrelation(draft, references);
  let components = 3;
  if (new Set(sources).size >= 2 && references.length >= 5) {
    const rows = references.map((reference) => applySteps(reference.spectrum, draft.recipe).intensity);
    components = Math.max(
      3,
      Math.min(MOST_COMPONENTS, crossValidateComponents(rows, sources, MOST_COMPONENTS).suggested + 2)
    );
  }
  return { ...draft, criteria: { ...draft.criteria, minCorrelation, components } };
}

/** Room left at each end for an instrument's axis correction, cm-1. */
const END_ROOM_CM1 = 5;

/** The default recipe with its grid drawn in to what all references cover. */
function recipeFor(references: readonly LabelledReference[]): MethodDefinition['recipe'] {
  const from = Math.max(...references.map(({ spectrum }) => spectrum.shiftCm1[0])) + END_ROOM_CM1;
  const to =
    Math.min(...references.map(({ spectrum }) => spectrum.shiftCm1[spectrum.shiftCm1.length - 1])) -
    END_ROOM_CM1;
  return DEFAULT_RECIPE.map((step) => {
    if (step.name !== 'resample') return step;
    const { fromCm1, toCm1 } = step.options as { fromCm1: number; toCm1: number };
    return {
      ...step,
      options: {
        ...step.options,
        fromCm1: Math.max(fromCm1, Math.ceil(from)),
        toCm1: Math.min(toCm1, Math.floor(to))
      }
    };
  });
}

import { createHash } from 'node:crypto';
import { canonicalJson } from '../../src/lib/identity/canonicalJson';
import { decide } from '../../src/lib/identity/decide';
import type { Decision } from '../../src/lib/identity/decision';
import { fitMethod } from '../../src/lib/identity/fitMethod';
import { encodeLibrary, makeLibraryEntry } from '../../src/lib/identity/library';
import { measure } from '../../src/lib/identity/measure';
import type { AxisCorrection, FittedMethod, Library, LibraryEntry } from '../../src/lib/identity/method';
import { prepareMethod, prepareRivals } from '../../src/lib/identity/prepared';
import { suggestDefinition } from '../../src/lib/identity/suggest';
import { correctAxis } from '../../src/lib/identity/variation';
import { StepRefusal } from '../../src/lib/spectra/preprocess/step';
import type { Labelled } from './readFolder';

/** The laser is the same for a folder's files as far as they do not say otherwise. */
const EXCITATION_NM = 785;

export interface Trial {
  readonly path: string;
  readonly truth: string;
  readonly claimed: string;
  readonly decision: Decision;
  /** Correlation with the claimed material's mean whatever the gates say; null where the recipe cannot treat it. */
  readonly correlation: number | null;
  readonly tookMs: number;
}

export interface Model {
  readonly material: string;
  readonly method: FittedMethod;
  readonly sha256: string;
  readonly entry: LibraryEntry;
}

type Corrections = (entry: Labelled) => AxisCorrection | null;

const sha256 = (content: string | Uint8Array) => createHash('sha256').update(content).digest('hex');

/** A method with the suggested definition from these spectra of one material. @throws Error with the reasons against */
export function modelOf(material: string, training: readonly Labelled[], correction: Corrections): Model {
  const references = training.map((entry) => ({
    id: entry.path,
    source: entry.source,
    spectrum: entry.spectrum,
    axisCorrection: correction(entry) ?? undefined
  }));
  const outcome = fitMethod(suggestDefinition(references, EXCITATION_NM), references);
  if (!outcome.ok) throw new Error(`${material}: ${outcome.reasons.join(' ')}`);
  const spectra = training.map((entry) => correctAxis(entry.spectrum, correction(entry)));
  return {
    material,
    method: outcome.method,
    sha256: sha256(canonicalJson(outcome.method)),
    entry: makeLibraryEntry({ materialId: material, itemCode: material, name: material }, spectra)
  };
}

/** One method for each material of the training spectra. */
export function modelsOf(training: readonly Labelled[], correction: Corrections): Model[] {
  const names = [...new Set(training.map((entry) => entry.material))];
  return names.map((name) =>
    modelOf(
      name,
      training.filter((entry) => entry.material === name),
      correction
    )
  );
}

/** Decides one spectrum under the method of every material. */
export function challenge(
  entry: Labelled,
  models: readonly Model[],
  correction: AxisCorrection | null
): Trial[] {
  const entries = models.map((model) => model.entry);
  const library: Library = { sha256: sha256(encodeLibrary(entries)), entries };
  return models.map((model) => {
    const request = {
      bytes: entry.bytes,
      readOptions: {},
      method: model.method,
      methodSha256: model.sha256,
      library,
      materialId: model.material,
      rawSha256: sha256(entry.bytes),
      instrument: { excitationNm: EXCITATION_NM },
      check: { state: 'valid' as const, correction }
    };
    decide(request);
    const start = performance.now();
    const decision = decide(request);
    const tookMs = performance.now() - start;
    const correlation = correlationOf(entry, model, library, correction);
    return {
      path: entry.path,
      truth: entry.material,
      claimed: model.material,
      decision,
      correlation,
      tookMs
    };
  });
}

function correlationOf(
  entry: Labelled,
  model: Model,
  library: Library,
  correction: AxisCorrection | null
): number | null {
  const method = prepareMethod(model.method, model.sha256);
  const rivals = prepareRivals(method, model.sha256, library, model.material);
  try {
    return measure(correctAxis(entry.spectrum, correction), method, rivals).correlation;
  } catch (error) {
    if (error instanceof StepRefusal) return null;
    throw error;
  }
}

/**
 * Leaves one source of a material out at a time (one spectrum where it has one source only), fits that material from
 * the rest and every other from all of its own, and decides what was left out under each.
 * A material with a single spectrum cannot be left out: it is fitted from it and never challenged as itself.
 */
export function leaveSourceOut(spectra: readonly Labelled[], correction: Corrections): Trial[] {
  const whole = modelsOf(spectra, correction);
  const trials: Trial[] = [];
  for (const { material } of whole) {
    const own = spectra.filter((entry) => entry.material === material);
    if (own.length === 1) {
      const others = whole.filter((model) => model.material !== material);
      trials.push(...challenge(own[0], others, correction(own[0])));
      continue;
    }
    const manySources = new Set(own.map((entry) => entry.source)).size > 1;
    const foldOf = (entry: Labelled) => (manySources ? entry.source : entry.path);
    for (const fold of new Set(own.map(foldOf))) {
      const rest = own.filter((entry) => foldOf(entry) !== fold);
      const refitted = modelOf(material, rest, correction);
      const models = whole.map((model) => (model.material === material ? refitted : model));
      for (const entry of own.filter((candidate) => foldOf(candidate) === fold))
        trials.push(...challenge(entry, models, correction(entry)));
    }
  }
  return trials;
}

/** Methods from one folder, challenges from another. */
export function trainAndTest(
  training: readonly Labelled[],
  testing: readonly Labelled[],
  correction: Corrections
): Trial[] {
  const models = modelsOf(training, correction);
  return testing.flatMap((entry) => challenge(entry, models, correction(entry)));
}

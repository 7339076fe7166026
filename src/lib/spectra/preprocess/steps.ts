import { z } from 'zod';
import type { Spectrum } from '../spectrum';
import { airpls } from './adaptiveReweighted';
import { asymmetricLeastSquares } from './asymmetricLeastSquares';
import { arpls } from './asymmetricReweighted';
import { despike } from './despike';
import { msc } from './msc';
import { polynomialBaseline } from './polynomialBaseline';
import { dropRanges, keepRanges } from './ranges';
import { resample } from './resample';
import { savitzkyGolay } from './savitzkyGolay';
import { snv } from './snv';
import type { PreprocessStep, StepContext } from './step';
import { unitVector } from './unitVector';

/**
 * Every preprocessing step there is, in the order a builder offers them. To add one: its file, a line here, a test.
 * To change what one does: a new version in its own file and a line here; the old line stays, since stored methods
 * name it.
 */
export const STEPS = [
  despike,
  resample,
  keepRanges,
  dropRanges,
  asymmetricLeastSquares,
  airpls,
  arpls,
  polynomialBaseline,
  savitzkyGolay,
  snv,
  msc,
  unitVector
] as const;

type Step = (typeof STEPS)[number];
export type StepName = Step['name'];
/** Options of the step of that name, as `apply` takes them. */
export type StepOptions<Name extends StepName> = Extract<Step, { name: Name }>['defaults'];

/** One step of a recipe as a method stores it. */
export interface StepSpec {
  readonly name: string;
  readonly version: number;
  readonly options: Readonly<Record<string, unknown>>;
}

/** The step of that name and version, or undefined. */
export function findStep(name: string, version: number): PreprocessStep<string, z.ZodType> | undefined {
  return STEPS.find((step) => step.name === name && step.version === version);
}

/** A step of a recipe at the step's newest version: its default options, with `options` laid over them. */
export function stepSpec<Name extends StepName>(
  name: Name,
  options: Partial<StepOptions<Name>> = {}
): StepSpec {
  let newest: Step | undefined;
  for (const step of STEPS)
    if (step.name === name && !(newest && newest.version > step.version)) newest = step;
  if (newest === undefined) throw new Error(`No preprocessing step is named ${name}.`);
  return { name, version: newest.version, options: { ...newest.defaults, ...options } };
}

/** A step as stored: a known name and version, and all of that step's options within their bounds. */
export const stepSpecSchema = z
  .strictObject({ name: z.string(), version: z.int(), options: z.record(z.string(), z.unknown()) })
  .superRefine((spec, context) => {
    const step = findStep(spec.name, spec.version);
    if (step === undefined) {
      const message = `There is no preprocessing step "${spec.name}" of version ${spec.version}.`;
      context.addIssue({ code: 'custom', path: ['name'], message });
      return;
    }
    for (const issue of step.options.safeParse(spec.options).error?.issues ?? []) {
      const path = ['options', ...issue.path];
      context.addIssue({ code: 'custom', path, message: `${step.title}: ${issue.message}` });
    }
  });

/** Longest recipe: far more than any sound one, and a bound on the work one scan can cause. */
const MAX_STEPS = 20;

/** A whole recipe. Exactly one resample step, since every reference and scan must end on the same axis. */
export const recipeSchema = z
  .array(stepSpecSchema)
  .max(MAX_STEPS, `A recipe may have at most ${MAX_STEPS} steps.`)
  .superRefine((recipe, context) => {
    const count = recipe.filter((spec) => spec.name === resample.name).length;
    if (count === 1) return;
    const message = `A recipe needs exactly one step that puts the spectrum on a uniform grid; this one has ${count}.`;
    context.addIssue({ code: 'custom', path: [], message });
  });

/** Outcome of reading a recipe: the recipe, or every fault found, in plain sentences. */
export type RecipeReading =
  | { readonly ok: true; readonly recipe: readonly StepSpec[] }
  | { readonly ok: false; readonly faults: readonly string[] };

/** Reads a recipe from a form, a file or the database. */
export function parseRecipe(input: unknown): RecipeReading {
  const read = recipeSchema.safeParse(input);
  if (read.success) return { ok: true, recipe: read.data };
  const faults = read.error.issues.map(({ path, message }) =>
    typeof path[0] === 'number' ? `Step ${path[0] + 1}. ${message}` : message
  );
  return { ok: false, faults };
}

/** The spectrum as it stands after one step of a recipe. */
export interface TracedStep {
  readonly step: StepSpec;
  readonly spectrum: Spectrum;
}

/**
 * Runs a recipe.
 * @param references the method's mean at each `msc` step of the recipe, in order
 * @throws StepRefusal when a step cannot treat the spectrum; z.ZodError when the recipe itself is faulty (a bug: read
 * recipes with `parseRecipe`)
 */
export function applySteps(
  spectrum: Spectrum,
  recipe: readonly StepSpec[],
  references: readonly Spectrum[] = []
): Spectrum {
  return applyStepsTraced(spectrum, recipe, references).at(-1)?.spectrum ?? spectrum;
}

/** As `applySteps`, keeping the spectrum after every step, for the evidence view and the method builder. */
export function applyStepsTraced(
  spectrum: Spectrum,
  recipe: readonly StepSpec[],
  references: readonly Spectrum[] = []
): TracedStep[] {
  const trace: TracedStep[] = [];
  let current = spectrum;
  let referencesUsed = 0;
  for (const step of recipe) {
    const context = needsReference(step) ? { reference: references[referencesUsed++] } : {};
    current = applyStep(current, step, context);
    trace.push({ step, spectrum: current });
  }
  return trace;
}

/** Whether a step of a recipe takes the method's mean reference at its point. */
export function needsReference(spec: StepSpec): boolean {
  return spec.name === msc.name;
}

/** Runs one step with its options checked; throws as `applySteps` does. */
export function applyStep(spectrum: Spectrum, spec: StepSpec, context: StepContext): Spectrum {
  const step = findStep(spec.name, spec.version);
  if (step === undefined) throw new Error(`No preprocessing step ${spec.name} of version ${spec.version}.`);
  return step.apply(spectrum, step.options.parse(spec.options), context);
}

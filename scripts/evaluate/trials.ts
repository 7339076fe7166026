import { decide } from '../../src/lib/identity/decide';
import type { CriterionCode, GateCode, Verdict } from '../../src/lib/identity/decision';
import { fitMethod } from '../../src/lib/identity/fitMethod';
import { makeLibraryEntry } from '../../src/lib/identity/library';
import type { AxisCorrection, FittedMethod, Library, LibraryEntry } from '../../src/lib/identity/method';
import { suggestDefinition } from '../../src/lib/identity/suggest';
import { STRETCHING_CM1 } from '../../src/lib/identity/suggestRecipe';
import type { Fold } from './folds';
import type { LabelledFile } from './spectraFolder';

/** One spectrum decided under one material's method. */
export interface Trial {
  readonly file: string;
  readonly material: string;
  readonly source: string;
  readonly claimed: string;
  readonly verdict: Verdict;
  readonly decidedBy: CriterionCode | GateCode | null;
  /** Agreement with the claimed material; null where there was no result. */
  readonly correlation: number | null;
  /** That agreement less the best other material's. */
  readonly lead: number | null;
  readonly milliseconds: number;
}

export interface TrialOptions {
  /** Axis correction by source (instrument); absent: none is known. */
  readonly corrections?: ReadonlyMap<string, AxisCorrection>;
  /** Excitation that every file is taken to have, nm: files of open collections seldom state it. */
  readonly excitationNm?: number;
  /** Samples lay bare before the probe (true by default). */
  readonly bare?: boolean;
}

const EXCITATION_NM = 785;

interface Fitted {
  readonly method: FittedMethod;
  readonly sha256: string;
  readonly entry: LibraryEntry;
}

/** Decides every held-out spectrum of every fold under every material's method. */
export function runTrials(folds: readonly Fold[], given: TrialOptions = {}): Trial[] {
  const options = { ...given, bare: (given.bare ?? true) && folds.every(reachStretching) };
  const fittedByFiles = new Map<string, Fitted>();
  return folds.flatMap((fold) => {
    const fitted = new Map<string, Fitted>();
    for (const [material, references] of fold.train) {
      const key = references.map((reference) => reference.file).join('|');
      const known =
        fittedByFiles.get(key) ?? fitMaterial(material, references, `${material} ${key}`, options);
      fittedByFiles.set(key, known);
      fitted.set(material, known);
    }
    const entries = [...fitted.values()].map((each) => each.entry);
    const library: Library = { sha256: `library ${fold.name}`, entries };
    return fold.held.flatMap((held) =>
      [...fitted].map(([claimed, method]) => tryOne(held, claimed, method, library, options))
    );
  });
}

/** A range that some spectra lack would only turn those away. */
function reachStretching({ train, held }: Fold): boolean {
  const files = [...held, ...[...train.values()].flat()];
  return files.every(({ spectrum }) => spectrum.shiftCm1[spectrum.shiftCm1.length - 1] > STRETCHING_CM1.from);
}

function fitMaterial(
  material: string,
  files: readonly LabelledFile[],
  name: string,
  { corrections, excitationNm = EXCITATION_NM, bare }: TrialOptions
): Fitted {
  const references = files.map(({ file, source, spectrum }) => ({
    id: file,
    source,
    spectrum,
    axisCorrection: corrections?.get(source)
  }));
  const outcome = fitMethod(suggestDefinition(references, excitationNm, { bare }), references);
  if (!outcome.ok) throw new Error(`${material}: ${outcome.reasons.join(' ')}`);
  const head = { materialId: material, itemCode: material, name: material };
  return {
    method: outcome.method,
    sha256: name,
    entry: makeLibraryEntry(
      head,
      files.map((file) => file.spectrum)
    )
  };
}

function tryOne(
  held: LabelledFile,
  claimed: string,
  { method, sha256 }: Fitted,
  library: Library,
  { corrections, excitationNm = EXCITATION_NM }: TrialOptions
): Trial {
  const started = performance.now();
  const decision = decide({
    bytes: held.bytes,
    readOptions: {},
    method,
    methodSha256: sha256,
    library,
    materialId: claimed,
    rawSha256: held.file,
    instrument: { excitationNm },
    check: { state: 'valid', correction: corrections?.get(held.source) ?? null }
  });
  const milliseconds = performance.now() - started;
  const { scores } = decision;
  const rival = scores?.bestRivalCorrelation ?? null;
  return {
    file: held.file,
    material: held.material,
    source: held.source,
    claimed,
    verdict: decision.verdict,
    decidedBy: decision.explanation.decidedBy,
    correlation: scores?.correlation ?? null,
    lead: scores && rival !== null ? scores.correlation - rival : null,
    milliseconds
  };
}

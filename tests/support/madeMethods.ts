import { createHash } from 'node:crypto';
import { canonicalJson } from '$lib/identity/canonicalJson';
import type { DecideRequest } from '$lib/identity/decide';
import { fitMethod } from '$lib/identity/fitMethod';
import { encodeLibrary, makeLibraryEntry } from '$lib/identity/library';
import type {
  FittedMethod,
  LabelledReference,
  Library,
  LibraryEntry,
  MethodDefinition
} from '$lib/identity/method';
import { suggestDefinition } from '$lib/identity/suggest';
import type { Spectrum } from '$lib/spectra/spectrum';
import { readLiner, readMaterials, type DemoMaterial } from '../../scripts/demo/materials';
import { INSTRUMENTS } from '../../scripts/demo/scenario';
import { synthesise, toDelimitedText, type SynthesisOptions } from '../../scripts/demo/synthesise';

export const [INSTRUMENT] = INSTRUMENTS;

export const sha256 = (bytes: Uint8Array | string): string =>
  createHash('sha256').update(bytes).digest('hex');

const materials = new Map(readMaterials().map((material) => [material.itemCode, material]));

export function madeMaterial(itemCode: string): DemoMaterial {
  const material = materials.get(itemCode);
  if (!material) throw new Error(`no material ${itemCode}`);
  return material;
}

export type ScanOptions = Partial<SynthesisOptions>;

/** A made spectrum of a demo material; lot and scan seeds default to ones no reference was made with. */
export function madeScan(itemCode: string, options: ScanOptions = {}): Spectrum {
  const material = madeMaterial(itemCode);
  return synthesise(material.bands, INSTRUMENT, {
    lotSeed: `${itemCode} challenge lot`,
    scanSeed: `${itemCode} challenge scan`,
    fluorescence: material.fluorescence,
    liner: readLiner(),
    ...options
  });
}

/** The bytes an instrument would export for a spectrum. */
export const asFile = (spectrum: Spectrum, title = 'scan'): Uint8Array =>
  new TextEncoder().encode(toDelimitedText(spectrum, INSTRUMENT, title));

/** References of a made material: `lots` lots, `scans` of each. */
export function madeReferences(itemCode: string, lots = 4, scans = 3): LabelledReference[] {
  const references: LabelledReference[] = [];
  for (let lot = 0; lot < lots; lot++) {
    for (let scan = 0; scan < scans; scan++) {
      const spectrum = madeScan(itemCode, {
        lotSeed: `${itemCode} reference lot ${lot}`,
        scanSeed: `${itemCode} reference lot ${lot} scan ${scan}`
      });
      references.push({ id: `${itemCode}-${lot}-${scan}`, source: `lot ${lot}`, spectrum });
    }
  }
  return references;
}

export interface MadeMethod {
  readonly materialId: string;
  readonly method: FittedMethod;
  readonly methodSha256: string;
  readonly entry: LibraryEntry;
}

export function methodFrom(
  itemCode: string,
  references: readonly LabelledReference[],
  adjust: (definition: MethodDefinition) => MethodDefinition = (definition) => definition
): MadeMethod {
  const outcome = fitMethod(adjust(suggestDefinition(references, INSTRUMENT.excitationNm)), references);
  if (!outcome.ok) throw new Error(`${itemCode}: ${outcome.reasons.join(' ')}`);
  const materialId = `id-${itemCode}`;
  const name = materials.get(itemCode)?.name ?? itemCode;
  return {
    materialId,
    method: outcome.method,
    methodSha256: sha256(canonicalJson(outcome.method)),
    entry: makeLibraryEntry(
      { materialId, itemCode, name },
      references.map((reference) => reference.spectrum)
    )
  };
}

export const madeMethod = (itemCode: string): MadeMethod => methodFrom(itemCode, madeReferences(itemCode));

export const libraryOf = (entries: readonly LibraryEntry[]): Library => ({
  sha256: sha256(encodeLibrary(entries)),
  entries
});

/** A decision request as the server would make it, on a checked instrument that reads true. */
export function requestFor(
  { materialId, method, methodSha256 }: MadeMethod,
  library: Library,
  bytes: Uint8Array,
  more: Partial<DecideRequest> = {}
): DecideRequest {
  return {
    bytes,
    readOptions: {},
    method,
    methodSha256,
    library,
    materialId,
    rawSha256: sha256(bytes),
    instrument: { excitationNm: INSTRUMENT.excitationNm },
    check: { state: 'valid', correction: null },
    ...more
  };
}

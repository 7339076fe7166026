import { readFileSync } from 'node:fs';
import type { RamanSuitability } from '../../src/lib/domain/materials';
import type { DemoBand } from './synthesise';

/** How well a band of reference/materials is known; the words are explained in its SOURCE.md. */
export const CONFIDENCES = [
  'confirmed',
  'positions confirmed, heights from memory',
  'from memory',
  'from memory, low'
] as const;

/** A band with where it comes from. */
export interface SourcedBand extends DemoBand {
  readonly source: string;
  readonly confidence: (typeof CONFIDENCES)[number];
}

export interface DemoMaterial {
  readonly itemCode: string;
  readonly name: string;
  readonly casNumber: string;
  readonly grade: string;
  readonly state: 'powder' | 'liquid';
  readonly flags: {
    readonly dark: boolean;
    readonly energetic: boolean;
    readonly lightSensitive: boolean;
    readonly degEgHighRisk: boolean;
  };
  readonly ramanSuitability: RamanSuitability;
  readonly suitabilityReason: string | null;
  readonly packaging: readonly string[];
  readonly fluorescence: number;
  readonly bands: readonly SourcedBand[];
}

/** What the plant does not buy but may meet: poisonous glycols, the liner, shift standards. */
export interface OtherMaterial {
  readonly itemCode: string;
  readonly name: string;
  readonly casNumber: string;
  readonly use: string;
  readonly fluorescence: number;
  readonly bands: readonly SourcedBand[];
}

const read = (path: string): unknown =>
  JSON.parse(readFileSync(new URL(`../../reference/${path}`, import.meta.url), 'utf8'));

/** The demo's materials with their published bands. */
export const readMaterials = (): DemoMaterial[] => read('materials/materials.json') as DemoMaterial[];

/** Substances of reference/materials that are no materials of the demo plant. */
export const readOthers = (): OtherMaterial[] => read('materials/others.json') as OtherMaterial[];

/** Bands of polyethylene, the liner. */
export const readLiner = (): SourcedBand[] => read('materials/liner.json') as SourcedBand[];

/** Bands of polystyrene as the instruments' standard; widths are from memory. */
export function readPolystyrene(): DemoBand[] {
  const standards = read('calibration/standards.json') as {
    name: string;
    bands: { shiftCm1: number; relativeIntensity?: number }[];
  }[];
  const bands = standards.find((standard) => standard.name === 'polystyrene')?.bands ?? [];
  return bands.map((band) => ({
    shiftCm1: band.shiftCm1,
    relativeHeight: (band.relativeIntensity ?? 10) / 100,
    fwhmCm1: 7
  }));
}

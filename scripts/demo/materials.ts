import { readFileSync } from 'node:fs';
import type { DemoBand } from './synthesise';

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
  readonly ramanSuitability: 'suitable' | 'no_first_order_spectrum';
  readonly suitabilityReason: string | null;
  readonly packaging: readonly string[];
  readonly fluorescence: number;
  readonly bands: readonly (DemoBand & { readonly source: string; readonly confidence: string })[];
}

const read = (path: string): unknown =>
  JSON.parse(readFileSync(new URL(`../../reference/${path}`, import.meta.url), 'utf8'));

/** The demo's materials with their published bands. */
export const readMaterials = (): DemoMaterial[] => read('materials/materials.json') as DemoMaterial[];

/** Bands of polyethylene, the liner. */
export const readLiner = (): DemoBand[] => read('materials/liner.json') as DemoBand[];

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

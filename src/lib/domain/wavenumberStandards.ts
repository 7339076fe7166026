import type { WavenumberStandard } from '../spectra/axis/wavenumberCheck';

/** A Raman shift standard with its bands as published; `fromMemory` marks positions that are not confirmed. */
export interface PublishedStandard extends WavenumberStandard {
  readonly source: string;
  readonly bands: readonly (WavenumberStandard['bands'][number] & { readonly fromMemory?: true })[];
}

/** Standards that a performance check may use. Standard deviations are from memory. */
export const WAVENUMBER_STANDARDS: readonly PublishedStandard[] = [
  {
    name: 'polystyrene',
    source: 'ASTM E1840-96(2022) Table of Raman shift standards (7 laboratories)',
    bands: [
      { shiftCm1: 620.9, sdCm1: 0.69 },
      { shiftCm1: 795.8, sdCm1: 0.78 },
      { shiftCm1: 1001.4, sdCm1: 0.54 },
      { shiftCm1: 1031.8, sdCm1: 0.43 },
      { shiftCm1: 1155.3, sdCm1: 0.56 },
      { shiftCm1: 1450.5, sdCm1: 0.56 },
      { shiftCm1: 1583.1, sdCm1: 0.86 },
      { shiftCm1: 1602.3, sdCm1: 0.73 },
      { shiftCm1: 2852.4, sdCm1: 0.89 },
      { shiftCm1: 2904.5, sdCm1: 1.22 },
      { shiftCm1: 3054.3, sdCm1: 1.36 }
    ]
  },
  {
    name: 'cyclohexane',
    source: 'ASTM E1840-96(2022) Table of Raman shift standards (7 laboratories)',
    bands: [
      { shiftCm1: 384.1, sdCm1: 0.78 },
      { shiftCm1: 426.3, sdCm1: 0.41 },
      { shiftCm1: 801.3, sdCm1: 0.96 },
      { shiftCm1: 1028.3, sdCm1: 0.45 },
      { shiftCm1: 1157.6, sdCm1: 0.94 },
      { shiftCm1: 1266.4, sdCm1: 0.58 },
      { shiftCm1: 1444.4, sdCm1: 0.3 },
      { shiftCm1: 2664.4, sdCm1: 0.42 },
      { shiftCm1: 2852.9, sdCm1: 0.32 },
      { shiftCm1: 2923.8, sdCm1: 0.36 },
      { shiftCm1: 2938.3, sdCm1: 0.51 }
    ]
  },
  {
    name: '4-acetamidophenol',
    source: 'ASTM E1840-96(2022) Table of Raman shift standards (7 laboratories)',
    bands: [
      { shiftCm1: 213.3, sdCm1: 1.77, fromMemory: true },
      { shiftCm1: 329.2, sdCm1: 0.52 },
      { shiftCm1: 390.9, sdCm1: 0.76 },
      { shiftCm1: 465.1, sdCm1: 0.3 },
      { shiftCm1: 504, sdCm1: 0.6 },
      { shiftCm1: 651.6, sdCm1: 0.5 },
      { shiftCm1: 710.8, sdCm1: 0.68 },
      { shiftCm1: 797.2, sdCm1: 0.48 },
      { shiftCm1: 834.5, sdCm1: 0.46 },
      { shiftCm1: 857.9, sdCm1: 0.5 },
      { shiftCm1: 968.7, sdCm1: 0.6 },
      { shiftCm1: 1105.5, sdCm1: 0.27 },
      { shiftCm1: 1168.5, sdCm1: 0.65 },
      { shiftCm1: 1236.8, sdCm1: 0.46 },
      { shiftCm1: 1278.5, sdCm1: 0.45 },
      { shiftCm1: 1323.9, sdCm1: 0.46 },
      { shiftCm1: 1371.5, sdCm1: 0.11 },
      { shiftCm1: 1515.1, sdCm1: 0.7 },
      { shiftCm1: 1561.6, sdCm1: 0.52 },
      { shiftCm1: 1648.4, sdCm1: 0.5 },
      { shiftCm1: 2931.1, sdCm1: 0.63, fromMemory: true },
      { shiftCm1: 3064.6, sdCm1: 0.31, fromMemory: true },
      { shiftCm1: 3102.4, sdCm1: 0.95, fromMemory: true },
      { shiftCm1: 3326.6, sdCm1: 2.18, fromMemory: true }
    ]
  },
  {
    name: 'naphthalene',
    source: 'ASTM E1840-96(2022) Table of Raman shift standards (7 laboratories)',
    bands: [
      { shiftCm1: 513.8, sdCm1: 0.31 },
      { shiftCm1: 763.8, sdCm1: 0.31 },
      { shiftCm1: 1021.6, sdCm1: 0.48 },
      { shiftCm1: 1147.2, sdCm1: 0.34 },
      { shiftCm1: 1382.2, sdCm1: 0.31 },
      { shiftCm1: 1464.5, sdCm1: 0.3 },
      { shiftCm1: 1576.6, sdCm1: 0.29 },
      { shiftCm1: 3056.4, sdCm1: 0.33 }
    ]
  },
  {
    name: 'calcite',
    source: 'CEN CWA 18133:2024 Table 7 (as carried in an open research library)',
    bands: [
      { shiftCm1: 155.21 },
      { shiftCm1: 281.26 },
      { shiftCm1: 711.95 },
      { shiftCm1: 1085.91 },
      { shiftCm1: 1435.22 },
      { shiftCm1: 1748.91 }
    ]
  }
];

/** The standard of that name, or undefined. */
export const findStandard = (name: string): PublishedStandard | undefined =>
  WAVENUMBER_STANDARDS.find((standard) => standard.name === name);

/** A set of allowed deviations offered as a starting point; the site confirms it against the chapter it works by. */
export interface SuggestedTolerances {
  readonly name: string;
  readonly standard: string;
  readonly source: string;
  readonly bands: readonly { readonly shiftCm1: number; readonly toleranceCm1: number }[];
}

const CHAPTER = 'Ph. Eur. 2.2.48, from memory: confirm against the chapter you hold before use';

export const SUGGESTED_TOLERANCES: readonly SuggestedTolerances[] = [
  {
    name: 'laboratory',
    standard: 'polystyrene',
    source: CHAPTER,
    bands: [
      { shiftCm1: 620.9, toleranceCm1: 1.5 },
      { shiftCm1: 1001.4, toleranceCm1: 1.5 },
      { shiftCm1: 1031.8, toleranceCm1: 1.5 },
      { shiftCm1: 1602.3, toleranceCm1: 1.5 }
    ]
  },
  {
    name: 'handheld',
    standard: 'polystyrene',
    source: CHAPTER,
    bands: [
      { shiftCm1: 620.9, toleranceCm1: 2.5 },
      { shiftCm1: 1001.4, toleranceCm1: 2.5 },
      { shiftCm1: 1031.8, toleranceCm1: 2.5 },
      { shiftCm1: 1602.3, toleranceCm1: 3 }
    ]
  },
  {
    name: 'laboratory',
    standard: 'cyclohexane',
    source: CHAPTER,
    bands: [
      { shiftCm1: 801.3, toleranceCm1: 1.5 },
      { shiftCm1: 1028.3, toleranceCm1: 1 },
      { shiftCm1: 1266.4, toleranceCm1: 1 },
      { shiftCm1: 1444.4, toleranceCm1: 1 }
    ]
  }
];

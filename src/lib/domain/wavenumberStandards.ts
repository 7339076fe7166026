import type { BandTolerance, StandardBand, WavenumberStandard } from '../spectra/axis/wavenumberCheck';

/** A band of a standard as published. Every standard deviation is from memory. */
export interface PublishedBand extends StandardBand {
  /** Height relative to the strongest band (100), where it was published. */
  readonly relativeIntensity?: number;
  /** Set where the position itself was recalled and not found again. */
  readonly fromMemory?: true;
}

/** A Raman shift standard with its bands and where they are published. */
export interface PublishedStandard extends WavenumberStandard {
  readonly source: string;
  readonly bands: readonly PublishedBand[];
}

const E1840 = 'ASTM E1840-96(2022) Table of Raman shift standards (7 laboratories)';

/** [shift cm-1, standard deviation cm-1, relative intensity] */
type Row = readonly [number, number, number?];

const published = ([shiftCm1, sdCm1, relativeIntensity]: Row): PublishedBand => ({
  shiftCm1,
  sdCm1,
  ...(relativeIntensity === undefined ? {} : { relativeIntensity })
});

const recalled = (row: Row): PublishedBand => ({ ...published(row), fromMemory: true });

const rows = (list: readonly Row[], as: (row: Row) => PublishedBand): PublishedBand[] => list.map(as);

/** Standards that a performance check may use. reference/calibration holds the same values. */
export const WAVENUMBER_STANDARDS: readonly PublishedStandard[] = [
  {
    name: 'polystyrene',
    source: E1840,
    bands: rows(
      [
        [620.9, 0.69, 16],
        [795.8, 0.78, 10],
        [1001.4, 0.54, 100],
        [1031.8, 0.43, 27],
        [1155.3, 0.56, 13],
        [1450.5, 0.56, 8],
        [1583.1, 0.86, 12],
        [1602.3, 0.73, 28],
        [2852.4, 0.89, 9],
        [2904.5, 1.22, 13],
        [3054.3, 1.36, 32]
      ],
      published
    )
  },
  {
    name: 'cyclohexane',
    source: E1840,
    bands: rows(
      [
        [384.1, 0.78, 2],
        [426.3, 0.41, 3],
        [801.3, 0.96, 95],
        [1028.3, 0.45, 15],
        [1157.6, 0.94, 6],
        [1266.4, 0.58, 14],
        [1444.4, 0.3, 12],
        [2664.4, 0.42, 8],
        [2852.9, 0.32, 100],
        [2923.8, 0.36, 58],
        [2938.3, 0.51, 67]
      ],
      published
    )
  },
  {
    name: '4-acetamidophenol',
    source: E1840,
    bands: [
      ...rows([[213.3, 1.77]], recalled),
      ...rows(
        [
          [329.2, 0.52],
          [390.9, 0.76],
          [465.1, 0.3],
          [504, 0.6],
          [651.6, 0.5],
          [710.8, 0.68],
          [797.2, 0.48],
          [834.5, 0.46],
          [857.9, 0.5],
          [968.7, 0.6],
          [1105.5, 0.27],
          [1168.5, 0.65],
          [1236.8, 0.46],
          [1278.5, 0.45],
          [1323.9, 0.46],
          [1371.5, 0.11],
          [1515.1, 0.7],
          [1561.6, 0.52],
          [1648.4, 0.5]
        ],
        published
      ),
      ...rows(
        [
          [2931.1, 0.63],
          [3064.6, 0.31],
          [3102.4, 0.95],
          [3326.6, 2.18]
        ],
        recalled
      )
    ]
  },
  {
    name: 'naphthalene',
    source: E1840,
    bands: rows(
      [
        [513.8, 0.31],
        [763.8, 0.31],
        [1021.6, 0.48],
        [1147.2, 0.34],
        [1382.2, 0.31],
        [1464.5, 0.3],
        [1576.6, 0.29],
        [3056.4, 0.33]
      ],
      published
    )
  },
  {
    name: 'calcite',
    source: 'CEN CWA 18133:2024 Table 7 (as carried in an open research library)',
    bands: [
      // Natural width of the strongest: Itoh, Appl. Spectrosc. 2025 (abstract).
      { shiftCm1: 155.21 },
      { shiftCm1: 281.26 },
      { shiftCm1: 711.95 },
      { shiftCm1: 1085.91, naturalFwhmCm1: 1.36 },
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
  readonly name: 'laboratory' | 'handheld';
  readonly standard: string;
  readonly source: string;
  readonly bands: readonly BandTolerance[];
}

/** Only the three materials are confirmed; every figure below is from memory, with low confidence. */
const CHAPTER = 'Ph. Eur. 2.2.48, from memory: confirm against the chapter you hold before use';

/** Bands above 2000 cm-1 are left out: an axis that ends below them would fail for a band it cannot see. */
const suggested = (
  name: SuggestedTolerances['name'],
  standard: string,
  ...rows: readonly (readonly [number, number])[]
): SuggestedTolerances => ({
  name,
  standard,
  source: CHAPTER,
  bands: rows.map(([shiftCm1, toleranceCm1]) => ({ shiftCm1, toleranceCm1 }))
});

export const SUGGESTED_TOLERANCES: readonly SuggestedTolerances[] = [
  suggested('laboratory', 'polystyrene', [620.9, 1.5], [1001.4, 1.5], [1031.8, 1.5], [1602.3, 1.5]),
  suggested('handheld', 'polystyrene', [620.9, 2.5], [1001.4, 2.5], [1031.8, 2.5], [1602.3, 3]),
  suggested('laboratory', 'cyclohexane', [801.3, 1.5], [1028.3, 1], [1266.4, 1], [1444.4, 1]),
  suggested('handheld', 'cyclohexane', [801.3, 2.5], [1028.3, 2.5], [1266.4, 2.5], [1444.4, 2.5]),
  suggested(
    'laboratory',
    '4-acetamidophenol',
    [797.2, 1.5],
    [857.9, 1.5],
    [1168.5, 1.5],
    [1236.8, 1.5],
    [1323.9, 1.5],
    [1648.4, 1.5]
  ),
  suggested(
    'handheld',
    '4-acetamidophenol',
    [797.2, 2.5],
    [857.9, 2.5],
    [1168.5, 2.5],
    [1236.8, 2.5],
    [1323.9, 2.5],
    [1648.4, 3]
  )
];

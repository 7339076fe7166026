import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { findStandard, SUGGESTED_TOLERANCES, WAVENUMBER_STANDARDS } from '$lib/domain/wavenumberStandards';
import { readMaterials, readPolystyrene } from '../../scripts/demo/materials';

interface StandardFile {
  readonly name: string;
  readonly source: string;
  readonly bands: readonly {
    readonly shiftCm1: number;
    readonly sdCm1?: number;
    readonly relativeIntensity?: number;
    readonly naturalFwhmCm1?: number;
    readonly confidence: 'confirmed' | 'from memory';
  }[];
}
interface ToleranceFile {
  readonly document: string;
  readonly name: string;
  readonly standard: string;
  readonly confidence: string;
  readonly bands: readonly { readonly shiftCm1: number; readonly toleranceCm1: number }[];
}
const read = <T>(name: string): T =>
  JSON.parse(readFileSync(new URL(`../../reference/calibration/${name}`, import.meta.url), 'utf8')) as T;
const STANDARDS = read<StandardFile[]>('standards.json');
const TOLERANCES = read<ToleranceFile[]>('tolerances.json');

describe('standards of the Raman shift axis (reference/calibration/SOURCE.md)', () => {
  it.each(WAVENUMBER_STANDARDS)('$name of the product is as in the evidence, band by band', (standard) => {
    const evidence = STANDARDS.find((row) => row.name === standard.name);
    expect(standard.source).toBe(evidence?.source);
    expect(
      standard.bands.map(({ fromMemory, ...band }) => ({
        ...band,
        confidence: fromMemory ? 'from memory' : 'confirmed'
      }))
    ).toEqual(evidence?.bands);
  });

  it('bands rise and none stands twice', () => {
    for (const { bands } of STANDARDS)
      bands.slice(1).forEach((band, i) => expect(band.shiftCm1).toBeGreaterThan(bands[i].shiftCm1));
  });

  it('a standard that is not on file is not found', () => expect(findStandard('moonstone')).toBeUndefined());

  it("polystyrene's heights are those of CEN CWA 18133, Table 8", () =>
    expect(findStandard('polystyrene')?.bands.map((band) => band.relativeIntensity)).toEqual([
      16, 10, 100, 27, 13, 8, 12, 28, 9, 13, 32
    ]));

  it('polystyrene of the demo has the places of ASTM E1840', () =>
    expect(readPolystyrene().map((band) => band.shiftCm1)).toEqual(
      findStandard('polystyrene')?.bands.map((band) => band.shiftCm1)
    ));

  it('paracetamol of the demo has the places of 4-acetamidophenol in ASTM E1840', () => {
    const places = findStandard('4-acetamidophenol')?.bands.map((band) => band.shiftCm1) ?? [];
    const demo = readMaterials().find((row) => row.itemCode === 'PAR')?.bands ?? [];
    for (const band of demo) expect(places).toContain(band.shiftCm1);
  });
});

describe('suggested tolerances: from memory, low confidence, settings and not constants', () => {
  it.each(SUGGESTED_TOLERANCES)('$name for $standard say to confirm them before use', (set) => {
    expect(set.source).toMatch(/from memory: confirm/);
    const places = findStandard(set.standard)?.bands.map((band) => band.shiftCm1) ?? [];
    for (const band of set.bands) expect(places).toContain(band.shiftCm1);
  });

  it.each(SUGGESTED_TOLERANCES)('$name for $standard are the evidence below 2000 cm-1', (set) => {
    const evidence = TOLERANCES.find(
      (row) => row.name === set.name && row.standard === set.standard && !row.document.includes('before')
    );
    expect(evidence?.confidence).toBe('from memory, low');
    expect(set.bands).toEqual(evidence?.bands.filter((band) => band.shiftCm1 < 2000));
  });

  it('each set has a name of its own with its standard', () => {
    const names = SUGGESTED_TOLERANCES.map((set) => `${set.name} ${set.standard}`);
    expect(new Set(names).size).toBe(6);
  });

  it('a handheld instrument is never held closer than a laboratory one', () => {
    for (const set of SUGGESTED_TOLERANCES.filter((row) => row.name === 'handheld')) {
      const laboratory = SUGGESTED_TOLERANCES.find(
        (row) => row.name === 'laboratory' && row.standard === set.standard
      );
      set.bands.forEach((band, i) =>
        expect(band.toleranceCm1).toBeGreaterThanOrEqual(laboratory?.bands[i].toleranceCm1 ?? Infinity)
      );
    }
  });
});

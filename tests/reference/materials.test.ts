import { describe, expect, it } from 'vitest';
import { isCasNumber, whyNoMethod } from '$lib/domain/materials';
import { CONFIDENCES, readLiner, readMaterials, readOthers } from '../../scripts/demo/materials';

/** Band lists of reference/materials, whose SOURCE.md says where each value is from. */
const MATERIALS = readMaterials();
const OTHERS = readOthers();
const LISTS = [
  ...MATERIALS.map(({ itemCode, bands }) => ({ itemCode, bands })),
  ...OTHERS.map(({ itemCode, bands }) => ({ itemCode, bands })),
  { itemCode: 'liner', bands: readLiner() }
];
const material = (itemCode: string) => {
  const found = MATERIALS.find((row) => row.itemCode === itemCode);
  if (!found) throw new Error(`no material ${itemCode}`);
  return found;
};
/** Place of the highest band. */
const strongest = (itemCode: string) =>
  [...material(itemCode).bands].sort((a, b) => b.relativeHeight - a.relativeHeight)[0].shiftCm1;

describe('materials of the demo plant', () => {
  it('are at least 26, each with its own item code and name', () => {
    expect(MATERIALS.length).toBeGreaterThanOrEqual(26);
    const all = [...MATERIALS, ...OTHERS];
    expect(new Set(all.map((row) => row.itemCode)).size).toBe(all.length);
    expect(new Set(all.map((row) => row.name)).size).toBe(all.length);
  });

  it.each([...MATERIALS, ...OTHERS].map((row) => [row.itemCode, row.casNumber]))(
    '%s has a CAS number with the right check digit: %s',
    (_, casNumber) => expect(isCasNumber(casNumber)).toBe(true)
  );

  it('can have a method exactly where they have bands, and say why where not', () => {
    for (const row of MATERIALS) {
      const suitable = row.ramanSuitability === 'suitable';
      expect([row.itemCode, row.bands.length > 0]).toEqual([row.itemCode, suitable]);
      expect([row.itemCode, whyNoMethod(row) === null]).toEqual([row.itemCode, suitable]);
    }
  });

  it('sodium chloride has no first-order spectrum, so no band (group theory of rock salt, from memory)', () => {
    expect(material('NAC').ramanSuitability).toBe('no_first_order_spectrum');
    expect(material('NAC').bands).toEqual([]);
  });

  it('glycerol, propylene glycol and macrogol ask for a glycol limit test; the sorbitol powder does not', () => {
    // FDA guidance FDA-2023-D-1573 (May 2023): it lists sorbitol solution, not the powder.
    const flagged = MATERIALS.filter((row) => row.flags.degEgHighRisk).map((row) => row.itemCode);
    expect(flagged).toEqual(['GLY', 'PRG', 'MAC']);
  });

  it('what a laser may heat or bleach is flagged', () => {
    expect(MATERIALS.filter((row) => row.flags.dark).map((row) => row.itemCode)).toEqual(['CHA']);
    expect(MATERIALS.filter((row) => row.flags.lightSensitive).map((row) => row.itemCode)).toEqual(['ASC']);
  });
});

describe('band lists', () => {
  it.each(LISTS)(
    'every band of $itemCode has a source, a known confidence and possible values',
    ({ bands }) => {
      for (const band of bands) {
        expect(band.source.length).toBeGreaterThan(5);
        expect(CONFIDENCES).toContain(band.confidence);
        expect(band.shiftCm1).toBeGreaterThan(50);
        expect(band.shiftCm1).toBeLessThan(4000);
        expect(band.relativeHeight).toBeGreaterThan(0);
        expect(band.relativeHeight).toBeLessThanOrEqual(1);
        expect(band.fwhmCm1).toBeGreaterThan(0.5);
        expect(band.fwhmCm1).toBeLessThan(120);
      }
    }
  );

  it.each(LISTS.filter((list) => list.bands.length > 0))(
    'no place stands twice in the list of $itemCode',
    ({ bands }) => expect(new Set(bands.map((band) => band.shiftCm1)).size).toBe(bands.length)
  );

  it.each(LISTS.filter((list) => list.bands.length > 0 && list.itemCode !== 'liner'))(
    'heights of $itemCode are relative to its strongest band',
    ({ itemCode, bands }) => {
      // Anhydrous lactose was recalled next to the monohydrate's strongest band.
      const top = itemCode === 'LAC-A' ? 0.8 : 1;
      expect(Math.max(...bands.map((band) => band.relativeHeight))).toBe(top);
    }
  );

  it('what is recalled never says that it is confirmed', () => {
    for (const { itemCode, bands } of LISTS)
      for (const band of bands)
        if (/recalled|literature pattern|estimate/.test(band.source))
          expect([itemCode, band.confidence]).not.toEqual([itemCode, 'confirmed']);
  });

  // Band tables found: De Gelder 2007, Wiercigroch 2017, Czamara 2015; lactose measured on SPECARB's spectrum.
  it.each([
    ['LAC-M', 357.4],
    ['SUC', 851],
    ['MCC', 1096],
    ['STA', 479],
    ['GLY', 850],
    ['STE', 1441],
    ['CIT-A', 784],
    ['ASC', 1653]
  ])('the strongest band of %s is the published one, %d cm-1', (itemCode, shiftCm1) =>
    expect(strongest(itemCode)).toBe(shiftCm1)
  );

  it('the liner that is looked for is part of the whole list of polyethylene', () => {
    const whole = OTHERS.find((row) => row.itemCode === 'PE')?.bands.map((band) => band.shiftCm1) ?? [];
    for (const band of readLiner()) expect(whole).toContain(band.shiftCm1);
  });
});

import { describe, expect, it } from 'vitest';
import { decodeLibrary, encodeLibrary, makeLibraryEntry } from '$lib/identity/library';
import { madeReferences, sha256 } from '../support/madeMethods';

const entryOf = (itemCode: string) =>
  makeLibraryEntry(
    { materialId: `id-${itemCode}`, itemCode, name: `${itemCode} naïve – 分` },
    madeReferences(itemCode, 2, 2).map((reference) => reference.spectrum)
  );
const ENTRIES = ['PAR', 'CAF', 'TIA'].map(entryOf);

describe('the library is one content with one hash', () => {
  it('what is packed comes out again to the last bit', () => {
    const bytes = encodeLibrary(ENTRIES);
    const back = decodeLibrary(bytes, sha256(bytes));
    expect(back.sha256).toBe(sha256(bytes));
    expect(back.entries).toEqual(ENTRIES);
  });

  it('packed again from what came out, it has the same bytes', () => {
    const bytes = encodeLibrary(ENTRIES);
    expect(encodeLibrary(decodeLibrary(bytes, '').entries)).toEqual(bytes);
    expect(encodeLibrary(['PAR', 'CAF', 'TIA'].map(entryOf))).toEqual(bytes);
  });

  it('it reads from the middle of a larger buffer, as a database driver hands it over', () => {
    const bytes = encodeLibrary(ENTRIES);
    const larger = new Uint8Array(bytes.length + 13);
    larger.set(bytes, 7);
    expect(decodeLibrary(larger.subarray(7, 7 + bytes.length), '').entries).toEqual(ENTRIES);
  });

  it('an empty library is one too', () => {
    expect(decodeLibrary(encodeLibrary([]), '').entries).toEqual([]);
  });

  it('one changed number, name or order gives another hash', () => {
    const hash = sha256(encodeLibrary(ENTRIES));
    const intensity = ENTRIES[0].spectrum.intensity.slice();
    intensity[100] += 2 ** -50;
    const moved = { ...ENTRIES[0], spectrum: { ...ENTRIES[0].spectrum, intensity } };
    expect(sha256(encodeLibrary([moved, ...ENTRIES.slice(1)]))).not.toBe(hash);
    expect(sha256(encodeLibrary([{ ...ENTRIES[0], name: 'x' }, ...ENTRIES.slice(1)]))).not.toBe(hash);
    expect(sha256(encodeLibrary([...ENTRIES].reverse()))).not.toBe(hash);
  });

  it('a brighter reference counts no more than a faint one', () => {
    const [first, second] = madeReferences('CAF', 2, 1).map((reference) => reference.spectrum);
    const material = { materialId: 'm', itemCode: 'M', name: 'M' };
    const brighter = { ...second, intensity: second.intensity.map((value) => value * 64) };
    const plain = makeLibraryEntry(material, [first, second]).spectrum.intensity;
    makeLibraryEntry(material, [first, brighter]).spectrum.intensity.forEach((value, i) =>
      expect(value).toBeCloseTo(plain[i], 12)
    );
  });

  it('a material without references is refused', () => {
    expect(() => makeLibraryEntry({ materialId: 'm', itemCode: 'M', name: 'M' }, [])).toThrow(RangeError);
  });
});

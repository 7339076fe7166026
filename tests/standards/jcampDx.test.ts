import { readdirSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { decodeAsdf } from '$lib/spectra/formats/jcampAsdf';
import { readSpectrumFile } from '$lib/spectra/formats/formats';
import { sharedPath } from '../support/sharedData';

const decode = (lines: string) => {
  const bytes = new TextEncoder().encode(lines);
  return decodeAsdf(bytes, 0, bytes.length);
};
const ordinates = (lines: string) => {
  const table = decode(lines);
  if ('problem' in table) throw new Error(table.problem.message);
  return Array.from(table.y);
};

/** McDonald & Wilks, Appl. Spectrosc. 42:151 (1988), Tables VI and VII, as carried in several public test suites. */
describe('JCAMP-DX 4.24: the published examples of the ordinate forms', () => {
  const VALUES = [1, 2, 3, 3, 2, 1, 0, -1, -2, -3];
  test.each([
    ['FIX', ' 1 2 3 3 2 1 0 -1 -2 -3'],
    ['PAC', '+1+2+3+3+2+1+0-1-2-3'],
    ['SQZ', 'ABCCBA@abc'],
    ['DIF', 'AJJ%jjjjjj'],
    ['DIFDUP', 'AJT%jX']
  ])('%s', (_form, entries) => expect(ordinates(`10${entries}`)).toEqual(VALUES));

  test('a long line with its check line', () => {
    const values = [
      0, 0, 0, 0, 2, 4, 4, 4, 7, 5, 4, 4, 5, 5, 7, 10, 11, 11, 6, 5, 7, 6, 9, 9, 7, 10, 10, 9, 10, 11, 12, 15,
      16, 16, 14, 17, 38, 38, 35, 38, 42, 47, 54, 59, 66, 75, 78, 88, 96, 104, 110, 121, 128
    ];
    expect(ordinates('599.860@VKT%TLkj%J%KLJ%njKjL%kL%jJULJ%kLK1%lLMNPNPRLJ0QTOJ1P\n700.158A28')).toEqual(
      values
    );
  });

  test('a check value that is wrong is refused', () => {
    expect(decode('599.000+1jj\n600.000+4jj')).toMatchObject({ problem: { code: 'check-failed', line: 2 } });
  });

  test('repeat counts after a plain number and after differences', () => {
    expect(ordinates('1 50%U')).toEqual([50, 50, 50, 50]);
    expect(ordinates('1A000J000TJ%%')).toEqual([1000, 2000, 3000, 3001, 3001, 3001]);
  });
});

/** Openly licensed files of many kinds; see the folder's README for origin and licence. */
describe('files of the field', () => {
  const folder = sharedPath('spectra/jcamp');
  const read = (path: string) => readSpectrumFile(new Uint8Array(readFileSync(join(folder as string, path))));

  test.skipIf(folder === null)('Raman files read, with their axis ascending', () => {
    const found = Object.fromEntries(
      ['adamantane.jdx', 'saffron.jdx', 'tannic_acid.jdx'].map((name) => {
        const outcome = read(`raman/${name}`);
        return [
          name,
          outcome.ok
            ? [outcome.spectrum.shiftCm1.length, Math.round(outcome.spectrum.shiftCm1[0])]
            : outcome.problem
        ];
      })
    );
    expect(found).toEqual({
      'adamantane.jdx': [1791, 101],
      'saffron.jdx': [668, 1000],
      'tannic_acid.jdx': [1949, 101]
    });
  });

  test.skipIf(folder === null)(
    'one spectrum in packed, squeezed and difference forms is one spectrum',
    () => {
      const [difdup, packed] = ['difdup', 'packed'].map((form) =>
        read(`odd/compression-small__jcamp-${form}.dx`)
      );
      if (!difdup.ok || !packed.ok) throw new Error('a form was not read');
      expect(Array.from(difdup.spectrum.intensity)).toEqual(Array.from(packed.spectrum.intensity));
    }
  );

  test.skipIf(folder === null)(
    'what is no Raman spectrum is refused by its unit, its lack of data or its few points',
    () => {
      const codes: Record<string, string> = {};
      for (const kind of ['nzhagen-test', 'odd']) {
        for (const name of readdirSync(join(folder as string, kind)).sort()) {
          const outcome = read(`${kind}/${name}`);
          if (!outcome.ok) codes[name] = outcome.problem.code;
        }
      }
      expect(codes).toEqual({
        '1HQuinine.jdx': 'unit-unknown',
        '2Methyl1Propanol.jdx': 'unit-unknown',
        'brukdif.jdx': 'unit-unknown',
        'difdup_example.jdx': 'unit-unknown',
        'jcamp2001_example.txt': 'unit-unknown',
        'noencoding_example.jdx': 'unit-unknown',
        'compression-small__jcamp-fix.dx': 'spectrum-fault',
        'mestrec__verySimple.jdx': 'no-data',
        'misc__camelLabels.jdx': 'no-data',
        'misc__multivariable.jdx': 'syntax',
        'misc__sameLabel.jdx': 'no-data',
        'structure__noend.jdx': 'no-data'
      });
    }
  );
});

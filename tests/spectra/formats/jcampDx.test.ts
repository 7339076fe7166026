import '../../support/fixedSeed';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { readSpectrumFile } from '$lib/spectra/formats/formats';
import { jcampFile, type AsdfForm } from '../../support/jcampEncode';

const FORMS: readonly AsdfForm[] = ['FIX', 'PAC', 'SQZ', 'DIF', 'DIFDUP'];
const bytes = (text: string) => new TextEncoder().encode(text);
const read = (text: string, options = {}) => readSpectrumFile(bytes(text), options);
const wave = Array.from({ length: 40 }, (_, i) => Math.round(500 + 300 * Math.sin(i / 4)) - (i % 5) * 90);

function mustRead(text: string, options = {}) {
  const outcome = read(text, options);
  if (!outcome.ok) throw new Error(`${outcome.problem.code}: ${outcome.problem.message}`);
  return outcome;
}
function mustRefuse(text: string, options = {}) {
  const outcome = read(text, options);
  if (outcome.ok) throw new Error('the file was read');
  return outcome.problem;
}

describe('every form of ordinates reads back what was written', () => {
  test.each(FORMS)('%s', (form) => {
    const { spectrum } = mustRead(jcampFile(wave, form));
    expect(Array.from(spectrum.intensity)).toEqual(wave);
    expect(Array.from(spectrum.shiftCm1)).toEqual(wave.map((_, i) => 400 + 2 * i));
  });

  test('whatever the numbers, the line ends and the factor', () => {
    const ordinates = fc.array(fc.integer({ min: -9_999_999, max: 9_999_999 }), {
      minLength: 16,
      maxLength: 120
    });
    fc.assert(
      fc.property(
        ordinates,
        fc.constantFrom(...FORMS),
        fc.constantFrom('\n', '\r\n', '\r'),
        fc.boolean(),
        (y, form, eol, end) => {
          const { spectrum } = mustRead(jcampFile(y, form, { eol, end }));
          expect(Array.from(spectrum.intensity)).toEqual(y.map((value) => value + 0));
        }
      ),
      { numRuns: 300 }
    );
  });

  test('a descending axis is turned round and said so', () => {
    const { spectrum, notes } = mustRead(jcampFile(wave, 'DIFDUP', { firstX: 1000, step: -2 }));
    expect(spectrum.shiftCm1[0]).toBe(1000 - 2 * 39);
    expect(Array.from(spectrum.intensity)).toEqual([...wave].reverse());
    expect(notes.join(' ')).toContain('turned round');
  });

  test('the factor scales the ordinates', () => {
    expect(mustRead(jcampFile(wave, 'SQZ', { factor: 0.5 })).spectrum.intensity[3]).toBe(wave[3] * 0.5);
  });

  test('points as pairs, with an uneven axis', () => {
    const points = wave.map((y, i) => `${(300 + i * 1.7 + (i % 3) * 0.1).toFixed(2)}, ${y}`);
    const { spectrum } = mustRead(
      [
        '##TITLE= pairs',
        '##JCAMP-DX= 5.01',
        '##XUNITS= 1/CM',
        '##NPOINTS= 40',
        '##XYPOINTS= (XY..XY)',
        ...points,
        '##END='
      ].join('\n')
    );
    expect(spectrum.shiftCm1.length).toBe(40);
    expect(Array.from(spectrum.intensity)).toEqual(wave);
  });
});

describe('what contradicts itself is refused, with the line and the cause', () => {
  const sound = jcampFile(wave, 'DIF');

  test('a check value that does not repeat the last ordinate', () => {
    const lines = sound.split('\n');
    const second = lines.findIndex((line) => line.startsWith('416'));
    lines[second] = lines[second].replace(/^416./, (start) => `416${start[3] === 'A' ? 'B' : 'A'}`);
    expect(mustRefuse(lines.join('\n'))).toMatchObject({ code: 'check-failed', line: second + 1 });
  });

  test('more or fewer points than stated', () => {
    expect(mustRefuse(sound.replace('##NPOINTS= 40', '##NPOINTS= 41'))).toMatchObject({
      code: 'count-mismatch'
    });
    const cut = sound.split('\n').filter((line) => !line.startsWith('416'));
    expect(mustRefuse(cut.join('\n')).code).toMatch(/count-mismatch|check-failed/);
  });

  test('an abscissa that is not where the axis says', () => {
    expect(mustRefuse(jcampFile(wave, 'FIX').replace('\n418 ', '\n438 '))).toMatchObject({
      code: 'check-failed',
      line: 14
    });
  });

  test('a step that is not the axis’s, and an axis of no extent', () => {
    expect(mustRefuse(sound.replace('##DELTAX= 2', '##DELTAX= 4')).code).toBe('check-failed');
    expect(mustRefuse(sound.replace('##LASTX= 478', '##LASTX= 400').replace('##DELTAX= 2\n', '')).code).toBe(
      'check-failed'
    );
  });

  test('a missing ordinate, a table that begins with a repeat count, a letter of no form', () => {
    const fixed = jcampFile(wave, 'FIX');
    expect(mustRefuse(fixed.replace(/\n400 \S+/, '\n400 ?')).code).toBe('no-data');
    expect(mustRefuse(fixed.replace(/\n400 \S+/, '\n400T')).code).toBe('syntax');
    expect(mustRefuse(fixed.replace(/\n400 \S+/, '\n400 §')).code).toBe('syntax');
  });

  test('an axis that is no Raman shift', () => {
    expect(mustRefuse(sound.replace('1/CM', 'SECONDS'))).toMatchObject({ code: 'unit-unknown', line: 4 });
  });
});

describe('what the file does not say is asked for', () => {
  test('several spectra: the choice is the user’s', () => {
    const both =
      jcampFile(wave, 'FIX').replace('made for a test', 'first') +
      jcampFile([...wave].reverse(), 'SQZ').replace('made for a test', 'second');
    expect(mustRefuse(both)).toMatchObject({ code: 'choice-needed', choices: ['first', 'second'] });
    expect(Array.from(mustRead(both, { block: 1 }).spectrum.intensity)).toEqual([...wave].reverse());
    expect(mustRefuse(both, { block: 7 }).code).toBe('choice-needed');
  });

  test('wavelengths need the excitation wavelength, from the file or from the user', () => {
    const nm = jcampFile(wave, 'FIX', { firstX: 800 }).replace('1/CM', 'NANOMETERS');
    expect(mustRefuse(nm).code).toBe('excitation-needed');
    // 1e7/785 - 1e7/800 = 238.8535 cm-1.
    expect(mustRead(nm, { excitationNm: 785 }).spectrum.shiftCm1[0]).toBeCloseTo(238.8535, 4);
    expect(
      mustRead(nm.replace('##XUNITS', '##RAMAN EXCITATION= 785\n##XUNITS')).acquisition.excitationNm
    ).toBe(785);
  });

  test('no closing label is a note; a wrong MAXY too', () => {
    expect(mustRead(jcampFile(wave, 'FIX', { end: false })).notes.join(' ')).toContain('##END=');
    expect(
      mustRead(jcampFile(wave, 'FIX').replace('##XYDATA', '##MAXY= 7\n##XYDATA')).notes.join(' ')
    ).toContain('MAXY');
  });
});

describe('R-086: a damaged file never makes the reader crash, hang or guess', () => {
  const originals = FORMS.map((form) => bytes(jcampFile(wave, form)));
  const isSound = (outcome: ReturnType<typeof readSpectrumFile>) => {
    if (!outcome.ok) {
      expect(outcome.problem.message.length).toBeGreaterThan(10);
      return;
    }
    for (const value of outcome.spectrum.intensity) expect(Number.isFinite(value)).toBe(true);
    for (let i = 1; i < outcome.spectrum.shiftCm1.length; i++)
      expect(outcome.spectrum.shiftCm1[i] > outcome.spectrum.shiftCm1[i - 1]).toBe(true);
  };

  test('every prefix of a file', () => {
    for (const original of originals)
      for (let end = 0; end < original.length; end++) isSound(readSpectrumFile(original.subarray(0, end)));
  });

  test('bytes changed, lines dropped, doubled and swapped', () => {
    const change = fc.record({ which: fc.nat(), at: fc.nat(), value: fc.integer({ min: 0, max: 255 }) });
    fc.assert(
      fc.property(
        fc.constantFrom(...originals),
        fc.array(change, { minLength: 1, maxLength: 6 }),
        fc.constantFrom('bytes', 'drop', 'double', 'swap'),
        (original, changes, kind) => {
          let damaged = original.slice();
          if (kind === 'bytes') for (const { at, value } of changes) damaged[at % damaged.length] = value;
          else {
            const lines = new TextDecoder('latin1').decode(original).split('\n');
            for (const { at, which } of changes) {
              if (kind === 'drop') lines.splice(at % lines.length, 1);
              else if (kind === 'double') lines.splice(at % lines.length, 0, lines[at % lines.length]);
              else
                [lines[at % lines.length], lines[which % lines.length]] = [
                  lines[which % lines.length],
                  lines[at % lines.length]
                ];
            }
            damaged = bytes(lines.join('\n'));
          }
          const started = performance.now();
          isSound(readSpectrumFile(damaged));
          expect(performance.now() - started).toBeLessThan(1000);
        }
      ),
      { numRuns: 1500 }
    );
  });

  test('noise', () => {
    fc.assert(
      fc.property(fc.uint8Array({ maxLength: 400 }), (noise) => isSound(readSpectrumFile(noise))),
      { numRuns: 1000 }
    );
  });
});

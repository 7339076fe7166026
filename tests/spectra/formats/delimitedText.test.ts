import '../../support/fixedSeed';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { COMMA, DecimalReader, POINT } from '$lib/spectra/formats/decimal';
import { MAX_FILE_BYTES } from '$lib/spectra/formats/textOf';
import { readSpectrumFile } from '$lib/spectra/formats/formats';

const bytes = (text: string) => new TextEncoder().encode(text);
const rows = Array.from({ length: 30 }, (_, i) => [200 + i * 1.5, 1000 + (i % 7) * 13.25] as const);
const table = (delimiter: string, decimal: '.' | ',', header: string[] = []) =>
  [
    ...header,
    ...rows.map((row) => row.map((value) => String(value).replace('.', decimal)).join(delimiter)),
    ''
  ].join('\n');

function mustRead(text: string, options = {}) {
  const outcome = readSpectrumFile(bytes(text), options);
  if (!outcome.ok) throw new Error(`${outcome.problem.code}: ${outcome.problem.message}`);
  return outcome;
}
function mustRefuse(input: string | Uint8Array, options = {}) {
  const outcome = readSpectrumFile(typeof input === 'string' ? bytes(input) : input, options);
  if (outcome.ok) throw new Error('the file was read');
  return outcome.problem;
}

describe('columns, delimiters and decimal marks are found and told', () => {
  test.each([
    [',', '.', 'comma', 'point'],
    [';', '.', 'semicolon', 'point'],
    [';', ',', 'semicolon', 'comma'],
    ['\t', '.', 'tab', 'point'],
    ['\t', ',', 'tab', 'comma'],
    ['|', '.', 'vertical bar', 'point'],
    ['   ', '.', 'spaces', 'point'],
    [' ', ',', 'spaces', 'comma']
  ] as const)('split by "%s" with decimal "%s"', (delimiter, decimal, name, mark) => {
    const { spectrum, notes } = mustRead(table(delimiter, decimal));
    expect(Array.from(spectrum.shiftCm1)).toEqual(rows.map(([x]) => x));
    expect(Array.from(spectrum.intensity)).toEqual(rows.map(([, y]) => y));
    expect(notes[0]).toContain(name);
    expect(notes[0]).toContain(`decimal ${mark}`);
  });

  test('header lines, comments, metadata and titles come before the numbers', () => {
    const { acquisition, notes, spectrum } = mustRead(
      table(',', '.', [
        '# Laser wavelength: 785 nm',
        '# Integration time (ms): 2000',
        '% Accumulations = 3',
        'Serial number: WF-1',
        'Raman shift (cm-1),Intensity'
      ])
    );
    expect(acquisition).toEqual({
      excitationNm: 785,
      integrationTimeMs: 2000,
      accumulations: 3,
      instrumentSerial: 'WF-1'
    });
    expect(notes.join(' ')).toContain('Raman shift (cm-1)');
    expect(spectrum.shiftCm1.length).toBe(30);
  });

  test('further columns are left out and counted', () => {
    const wide = rows.map(([x, y]) => `${x},${y},7,8`).join('\n');
    expect(mustRead(wide).notes.join(' ')).toContain('2 other columns');
    expect(mustRead(wide, { intensityColumn: 3 }).spectrum.intensity[0]).toBe(8);
    expect(mustRefuse(wide, { intensityColumn: 9 }).message).toContain('column 10 does not exist');
  });

  test('the column that says Raman shift is the axis, wherever it stands', () => {
    const text = ['Intensity;Raman shift / cm-1', ...rows.map(([x, y]) => `${y};${x}`)].join('\n');
    expect(mustRead(text).spectrum.shiftCm1[1]).toBe(201.5);
  });

  test('wavelengths in nm need the excitation wavelength', () => {
    const text = ['Wavelength (nm),Counts', ...rows.map(([x, y]) => `${x + 600},${y}`)].join('\n');
    expect(mustRefuse(text).code).toBe('excitation-needed');
    expect(mustRead(text, { excitationNm: 785 }).spectrum.shiftCm1[0]).toBeCloseTo(1e7 / 785 - 1e7 / 800, 9);
  });

  test('UTF-8 and UTF-16 with byte order marks', () => {
    const text = table('\t', '.');
    const marked = new Uint8Array([0xef, 0xbb, 0xbf, ...bytes(text)]);
    const wide = new Uint8Array(2 + text.length * 2);
    wide.set([0xff, 0xfe]);
    for (let i = 0; i < text.length; i++) wide[2 + 2 * i] = text.charCodeAt(i);
    for (const input of [marked, wide]) expect(readSpectrumFile(input)).toMatchObject({ ok: true });
  });
});

describe('R-059: a file is read whole or refused whole', () => {
  test('a cell that is no number names its line and column', () => {
    const lines = table(',', '.').split('\n');
    lines[11] = '216.5,abc';
    expect(mustRefuse(lines.join('\n'))).toMatchObject({
      code: 'syntax',
      line: 12,
      message: expect.stringContaining('column 2')
    });
  });
  test('a short line, an axis that turns back, a value twice', () => {
    const lines = table(',', '.').split('\n');
    expect(mustRefuse([...lines.slice(0, 9), '213.5', ...lines.slice(9)].join('\n'))).toMatchObject({
      code: 'syntax',
      line: 10
    });
    expect(mustRefuse([...lines.slice(0, 20), ...lines.slice(5)].join('\n'))).toMatchObject({
      code: 'spectrum-fault',
      line: 21
    });
    expect(mustRefuse([...lines.slice(0, 5), lines[4], ...lines.slice(5)].join('\n'))).toMatchObject({
      code: 'spectrum-fault',
      line: 6
    });
  });
  test('nothing, too much, pictures, documents and archives', () => {
    expect(mustRefuse('').code).toBe('empty');
    expect(mustRefuse(new Uint8Array(MAX_FILE_BYTES + 1).fill(0x31)).code).toBe('too-large');
    expect(mustRefuse(new Uint8Array([0x25, 0x50, 0x44, 0x46, 0x2d])).message).toContain('PDF');
    expect(mustRefuse(new Uint8Array([0x50, 0x4b, 3, 4, 0])).message).toContain('archive');
    expect(mustRefuse(new Uint8Array(100)).code).toBe('not-text');
    expect(mustRefuse('one line of prose without numbers').code).toBe('no-data');
  });
});

describe('numbers are those of the language, to the last bit', () => {
  const isSame = (text: string, mark = POINT) => {
    const input = bytes(mark === COMMA ? text.replace('.', ',') : text);
    const reader = new DecimalReader(input, mark);
    expect(reader.read(0, input.length)).toBe(Number(text));
    expect(reader.end).toBe(input.length);
  };
  test('of every magnitude', () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => isSame(String(value))),
      { numRuns: 3000 }
    );
    fc.assert(
      fc.property(fc.integer({ min: -1e9, max: 1e9 }), fc.integer({ min: 0, max: 12 }), (value, places) =>
        isSame((value / 1000).toFixed(places), COMMA)
      ),
      { numRuns: 2000 }
    );
  });
  test.each([
    '0',
    '-0',
    '+7',
    '.5',
    '5.',
    '123456789012345678',
    '0.1',
    '1e22',
    '1e23',
    '9007199254740993',
    '4.35',
    '2.2250738585072011e-308'
  ])('%s', (text) => isSame(text));
});

describe('R-086: hostile text', () => {
  test('is answered quickly, however long its lines', () => {
    for (const text of [
      ' '.repeat(50_000),
      '#'.repeat(50_000),
      `${','.repeat(50_000)}\n1,2`,
      `x${'\t '.repeat(25_000)}`,
      `${'a:'.repeat(25_000)}\n1,2\n2,3`,
      `"${'"'.repeat(50_000)}`
    ]) {
      const started = performance.now();
      readSpectrumFile(bytes(text));
      expect(performance.now() - started).toBeLessThan(200);
    }
  });
  test('never crashes and never yields what is no number', () => {
    const cell = fc.constantFrom('1', '2.5', '-3', '1e5', '', 'x', '"4"', '1,5', 'NaN', ';', '\t');
    const line = fc
      .array(cell, { maxLength: 4 })
      .chain((cells) => fc.constantFrom(',', ';', '\t', ' ').map((delimiter) => cells.join(delimiter)));
    fc.assert(
      fc.property(fc.array(line, { maxLength: 40 }), (lines) => {
        const outcome = readSpectrumFile(bytes(lines.join('\n')));
        if (outcome.ok)
          for (const value of outcome.spectrum.intensity) expect(Number.isFinite(value)).toBe(true);
        else expect(outcome.problem.message).not.toBe('');
      }),
      { numRuns: 2000 }
    );
  });
});

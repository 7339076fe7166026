import fc from 'fast-check';
import { beforeAll, describe, expect, it } from 'vitest';
import { canonicalJson } from '$lib/identity/canonicalJson';
import { decide, type DecideRequest } from '$lib/identity/decide';
import type { Decision } from '$lib/identity/decision';
import type { Library } from '$lib/identity/method';
import { seededRandom } from '$lib/spectra/statistics/seededRandom';
import type { Spectrum } from '$lib/spectra/spectrum';
import { readLiner, readMaterials } from '../../scripts/demo/materials';
import { synthesise } from '../../scripts/demo/synthesise';
import {
  asFile,
  INSTRUMENT,
  libraryOf,
  madeMethod,
  madeScan,
  requestFor,
  type MadeMethod
} from '../support/madeMethods';

const SUITABLE = readMaterials().filter((material) => material.ramanSuitability === 'suitable');
const methods = new Map<string, MadeMethod>();
let library: Library;

beforeAll(() => {
  for (const { itemCode } of SUITABLE) methods.set(itemCode, madeMethod(itemCode));
  library = libraryOf([...methods.values()].map((made) => made.entry));
}, 60_000);

const methodOf = (itemCode: string): MadeMethod => methods.get(itemCode) as MadeMethod;
const request = (claimed: string, spectrum: Spectrum, more: Partial<DecideRequest> = {}) =>
  requestFor(methodOf(claimed), library, asFile(spectrum), more);
const under = (claimed: string, spectrum: Spectrum): Decision => decide(request(claimed, spectrum));

const everyMaterial = SUITABLE.map((material) => material.itemCode);
const axis = madeScan('PAR').shiftCm1;
const curve = (at: (x: number) => number): Spectrum => ({ shiftCm1: axis, intensity: axis.map(at) });

describe('R-071: the decision is reproducible and the claim decides', () => {
  it('R-071: the same request gives the same canonical bytes, also after other work in between', () => {
    const one = canonicalJson(under('LAC-M', madeScan('LAC-M')));
    for (const other of ['SUC', 'TIA', 'GLY']) under(other, madeScan('LAC-M'));
    expect(canonicalJson(under('LAC-M', madeScan('LAC-M')))).toBe(one);
    const parsed = JSON.parse(JSON.stringify(methodOf('LAC-M').method)) as MadeMethod['method'];
    const fresh = request('LAC-M', madeScan('LAC-M'), {
      method: parsed,
      methodSha256: 'read back from JSON'
    });
    const { methodSha256 } = methodOf('LAC-M');
    expect(canonicalJson({ ...decide(fresh), methodSha256 })).toBe(one);
  });

  it('R-071: a request is not changed by deciding it', () => {
    const asked = request('MAN', madeScan('MAN'));
    const before = canonicalJson({ method: asked.method, bytes: Array.from(asked.bytes) });
    decide(asked);
    expect(canonicalJson({ method: asked.method, bytes: Array.from(asked.bytes) })).toBe(before);
  });

  it.each(everyMaterial)('a new lot of %s passes as itself', (itemCode) => {
    const decision = under(itemCode, madeScan(itemCode));
    expect([decision.verdict, decision.explanation.detail]).toEqual(['pass', expect.any(String)]);
    expect(decision.criteria.every((criterion) => criterion.outcome === 'met')).toBe(true);
  });

  it('R-101: no material passes as another, of all pairs of the demo', () => {
    const accepted: string[] = [];
    for (const claimed of everyMaterial) {
      for (const other of everyMaterial) {
        if (other === claimed) continue;
        if (under(claimed, madeScan(other)).verdict === 'pass') accepted.push(`${other} as ${claimed}`);
      }
    }
    expect(accepted).toEqual([]);
  }, 60_000);

  it('a first material is decided without any other to compare with, or with none whose axis reaches as far', () => {
    const first = methodOf('PAR');
    const short = methodOf('CAF').entry;
    const cut = {
      shiftCm1: short.spectrum.shiftCm1.slice(0, 500),
      intensity: short.spectrum.intensity.slice(0, 500)
    };
    for (const others of [[], [{ ...short, spectrum: cut }]]) {
      const alone = libraryOf([first.entry, ...others]);
      const genuine = decide(requestFor(first, alone, asFile(madeScan('PAR'))));
      expect([genuine.verdict, genuine.scores?.bestRivalCorrelation]).toEqual(['pass', null]);
      expect(genuine.criteria.some((criterion) => criterion.code === 'best-match')).toBe(false);
      expect(decide(requestFor(first, alone, asFile(madeScan('SUC')))).verdict).toBe('fail');
    }
  });

  it('brightness and offset of a file move neither verdict nor score beyond rounding', () => {
    const scan = madeScan('SUC');
    const base = under('SUC', scan);
    const scale = fc.constantFrom(0.25, 0.5, 2, 3, 10, 1000);
    const offset = fc.constantFrom(0, 100, 50_000);
    fc.assert(
      fc.property(scale, offset, (by, plus) => {
        const moved = under('SUC', { ...scan, intensity: scan.intensity.map((y) => y * by + plus) });
        // The fluorescence gate looks at the background, which an offset raises: no other figure may move.
        expect(moved.verdict).toBe(base.verdict);
        expect(moved.scores?.correlation).toBeCloseTo(base.scores?.correlation ?? NaN, 8);
        expect(moved.scores?.qResidual).toBeCloseTo(base.scores?.qResidual ?? NaN, 6);
      }),
      { numRuns: 18 }
    );
  });
});

describe('what is no material at all passes under none', () => {
  const nothing: readonly [string, Spectrum][] = [
    ['a dark, empty measurement', curve(() => 12)],
    ['a sloping background', curve((x) => 9000 - 3 * x)],
    ['noise', noise(3)],
    [
      'a bare liner',
      synthesise(readLiner(), INSTRUMENT, { lotSeed: 'liner', scanSeed: 'bare', linerShare: 0 })
    ],
    [
      'glass: broad humps',
      curve((x) => 200 + 5000 * hump(x, 450, 180) + 2600 * hump(x, 800, 120) + 2000 * hump(x, 1080, 160))
    ],
    ['fluorescence alone', curve((x) => 30_000 * hump(x, 900, 900) + 40 * Math.sin(x * 12.9898))]
  ];
  it.each(nothing)('R-101: %s', (_, spectrum) => {
    for (const claimed of everyMaterial)
      expect([claimed, under(claimed, spectrum).verdict]).not.toContain('pass');
  });

  function hump(x: number, centre: number, width: number): number {
    return Math.exp(-(((x - centre) / width) ** 2));
  }
  function noise(seed: number): Spectrum {
    const random = seededRandom(seed);
    return curve(() => 800 + 60 * (random() + random() + random() - 1.5));
  }
});

describe('what an operator reads names no other material', () => {
  it('reason and advice of every outcome, over every pair of sugars and polyols', () => {
    const names = SUITABLE.flatMap((material) => [material.itemCode, material.name, material.casNumber]);
    for (const claimed of ['LAC-M', 'GLU-M', 'SUC', 'MAN', 'SOR']) {
      for (const other of everyMaterial) {
        const { explanation } = under(claimed, madeScan(other));
        const words = `${explanation.reason} ${explanation.advice}`;
        for (const name of names) expect(words.includes(name)).toBe(false);
      }
    }
  });

  it('QA is told the better match by name, and that it is a better one', () => {
    const { verdict, explanation } = under('MAN', madeScan('SOR'));
    expect(verdict).toBe('fail');
    expect(explanation.detail).toContain('A better match is Sorbitol (SOR)');
    expect(explanation.rivals[0].itemCode).toBe('SOR');
    expect(explanation.causes[0]).toBe('Another material.');
  });
});

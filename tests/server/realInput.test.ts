import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { seededRandom } from '$lib/spectra/statistics/seededRandom';
import { startApplication, type RunningApplication } from '../support/application';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, type Fixtures } from '../support/fixtures';
import { makeTestPlant, scanForm, textFile, type TestPlant } from '../support/plant';

/** Real spectra, openly licensed, kept beside the checkout; see their README for origin and licence. */
const FOLDER = new URL('../../../shared/spectra/', import.meta.url);
const present = existsSync(FOLDER);
if (!present) console.log('skipped: the folder of real spectra is not beside this checkout');

const read = (path: string) => readFileSync(new URL(path, FOLDER), 'utf8');
const rowsOf = (path: string) =>
  read(path)
    .trim()
    .split(/\r?\n/)
    .slice(1)
    .map((line) => line.split(',').slice(0, 2).map(Number));

/** A real spectrum measured again in effect: fresh noise of 0.4 % of the largest intensity, from a seed. */
function again(path: string, seed: number): string {
  const random = seededRandom(seed);
  const rows = rowsOf(path);
  const top = Math.max(...rows.map(([, y]) => y));
  const lines = rows.map(
    ([x, y]) => `${x},${(y + 0.004 * top * (random() + random() + random() - 1.5)).toFixed(5)}`
  );
  return ['Raman shift (cm-1),Intensity', ...lines, ''].join('\n');
}

const semicolons = (path: string) =>
  [
    'Raman shift (cm-1);Intensity',
    ...rowsOf(path).map(([x, y]) => `${String(x).replace('.', ',')};${String(y).replace('.', ',')}`),
    ''
  ].join('\r\n');
const jcamp = (path: string) => {
  const rows = rowsOf(path);
  return [
    '##TITLE= real',
    '##JCAMP-DX= 5.01',
    '##DATA TYPE= RAMAN SPECTRUM',
    '##XUNITS= 1/CM',
    '##YUNITS= COUNTS',
    `##NPOINTS= ${rows.length}`,
    '##XYPOINTS= (XY..XY)',
    ...rows.map(([x, y]) => `${x}, ${y}`),
    '##END=',
    ''
  ].join('\n');
};

let database: TestDatabase;
let people: Fixtures['people'];
let plant: TestPlant;
let app: RunningApplication;
const lots: Record<string, Awaited<ReturnType<TestPlant['registerLot']>>> = {};

beforeAll(async () => {
  if (!present) return;
  database = await testDatabase();
  const fixtures = await makeFixtures(database.db);
  people = fixtures.people;
  plant = await makeTestPlant(database.db, fixtures);
  const polystyrene = readdirSync(new URL('calibration/polystyrene/', FOLDER)).sort();
  const built = polystyrene.filter((name) => /instrument-[ab]/.test(name) && !/z050/.test(name));
  const materials: Record<string, string> = {
    polystyrene: await plant.addMaterial(
      'REAL-PS',
      built.map((name) => textFile(name, read(`calibration/polystyrene/${name}`)))
    ),
    lactose: await plant.addMaterial(
      'REAL-LAC',
      [1, 2, 3, 4].map((seed) => textFile(`lactose-${seed}.csv`, again('carbohydrates/lactose.csv', seed)))
    ),
    fructose: await plant.addMaterial(
      'REAL-FRU',
      [5, 6, 7, 8].map((seed) => textFile(`fructose-${seed}.csv`, again('carbohydrates/fructose.csv', seed)))
    )
  };
  for (const [name, id] of Object.entries(materials)) lots[name] = await plant.registerLot(id, 8);
  app = await startApplication(database.appUrl);
});

afterAll(async () => {
  await app?.stop();
  await database?.close();
});

const used: Record<string, number> = {};

async function submit(claimed: string, fileName: string, text: string) {
  const lot = lots[claimed];
  const index = (used[claimed] = (used[claimed] ?? -1) + 1);
  const form = scanForm(
    {
      scanId: randomUUID(),
      barcode: lot.barcodes[index],
      lotId: lot.lotId,
      instrumentId: plant.instrumentId
    },
    textFile(fileName, text)
  );
  const response = await app.request('/api/v1/scans', {
    method: 'POST',
    body: form,
    token: people.operator.token
  });
  return {
    status: response.status,
    body: (await response.json()) as {
      decision: { verdict: string; explanation: { detail: string; rivals: unknown[] } };
      detail?: string;
    }
  };
}

test.skipIf(!present)(
  'real spectra pass under their own material, in every way of writing them',
  async () => {
    const cases: [string, string, string][] = [
      ['lactose', 'comma.csv', read('carbohydrates/lactose.csv')],
      ['lactose', 'decimal-comma.csv', semicolons('carbohydrates/lactose.csv')],
      ['lactose', 'points.jdx', jcamp('carbohydrates/lactose.csv')],
      ['fructose', 'comma.csv', read('carbohydrates/fructose.csv')],
      ['fructose', 'decimal-comma.csv', semicolons('carbohydrates/fructose.csv')],
      ['fructose', 'points.jdx', jcamp('carbohydrates/fructose.csv')],
      ['polystyrene', 'a-z050.csv', read('calibration/polystyrene/instrument-a-785_z050.csv')],
      ['polystyrene', 'b-z050.csv', semicolons('calibration/polystyrene/instrument-b-532_z050.csv')]
    ];
    for (const [claimed, fileName, text] of cases) {
      const { status, body } = await submit(claimed, fileName, text);
      expect([claimed, fileName, status, body.decision?.verdict, body.detail]).toEqual([
        claimed,
        fileName,
        201,
        'pass',
        undefined
      ]);
    }
  }
);

test.skipIf(!present)(
  'real spectra fail under another material, and the operator is told of no rival',
  async () => {
    const cases: [string, string][] = [
      ['lactose', 'carbohydrates/fructose.csv'],
      ['fructose', 'carbohydrates/lactose.csv'],
      ['lactose', 'carbohydrates/ribose.csv'],
      ['fructose', 'calibration/polystyrene/instrument-a-785_z100.csv'],
      ['polystyrene', 'solvents/pyridine.csv'],
      ['polystyrene', 'calibration/calcite-natural/instrument-a-785_z100.csv']
    ];
    for (const [claimed, path] of cases) {
      const { status, body } = await submit(claimed, path.split('/').pop() as string, read(path));
      expect([claimed, path, status, body.decision?.verdict]).toEqual([claimed, path, 201, 'fail']);
      expect(body.decision.explanation.rivals).toEqual([]);
      expect(body.decision.explanation.detail).not.toMatch(/REAL-|Material/);
    }
  }
);

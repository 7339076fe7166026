import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { startApplication, type RunningApplication } from '../support/application';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, type Fixtures } from '../support/fixtures';
import { makeTestPlant, scanForm, spectrumFile, textFile, type TestPlant } from '../support/plant';

let database: TestDatabase;
let people: Fixtures['people'];
let plant: TestPlant;
let app: RunningApplication;
let lot: Awaited<ReturnType<TestPlant['registerLot']>>;
let other: Awaited<ReturnType<TestPlant['registerLot']>>;
let materialId: string;

beforeAll(async () => {
  database = await testDatabase();
  const fixtures = await makeFixtures(database.db);
  people = fixtures.people;
  plant = await makeTestPlant(database.db, fixtures);
  materialId = await plant.addDemoMaterial('CAC');
  lot = await plant.registerLot(materialId, 4);
  other = await plant.registerLot(materialId, 1);
  app = await startApplication(database.appUrl, { env: { BODY_SIZE_LIMIT: '64M' } });
});
afterAll(async () => {
  await app?.stop();
  await database?.close();
});

type Problem = {
  status: number;
  title: string;
  detail: string;
  next: string;
  fields?: Record<string, string>;
};

async function post(form: FormData): Promise<{ status: number; problem: Problem }> {
  const response = await app.request('/api/v1/scans', {
    method: 'POST',
    body: form,
    token: people.operator.token
  });
  return { status: response.status, problem: (await response.json()) as Problem };
}

const fields = (more: Record<string, string> = {}) => ({
  scanId: randomUUID(),
  barcode: lot.barcodes[0],
  lotId: lot.lotId,
  instrumentId: plant.instrumentId,
  ...more
});
const points = (lines: string[]) => textFile('scan.csv', lines.join('\n'));
const ramp = (count: number) => Array.from({ length: count }, (_, i) => `${200 + i},${100 + (i % 7)}`);
const counts = async () =>
  (
    await database.ownerSql`select (select count(*)::int from scans) as scans, (select count(*)::int from decisions) as decisions`
  )[0];

describe('R-059, R-086: a file that is no spectrum is refused in plain words, kept with the reason, and counts as no attempt', () => {
  const cases: [string, () => ReturnType<typeof textFile>, RegExp][] = [
    ['an empty file', () => textFile('empty.csv', ''), /empty/],
    [
      'a PNG picture',
      () => ({
        fileName: 'scan.csv',
        mediaType: 'text/csv',
        bytes: new Uint8Array([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a, 0, 1, 2, 3])
      }),
      /PNG picture/
    ],
    [
      'two columns of words',
      () => points(['shift,height', ...Array.from({ length: 40 }, () => 'low,high')]),
      /no two columns of numbers/
    ],
    [
      'NaN among the numbers',
      () => points([...ramp(30), '230,NaN', ...ramp(60).slice(31)]),
      /Line 31: .*not a number/
    ],
    ['three points', () => points(['200,1', '201,2', '202,3']), /3 points/],
    [
      'an axis value twice',
      () => points([...ramp(30), '229,104', ...ramp(60).slice(30)]),
      /stands there twice/
    ],
    [
      'a web page named as text',
      () => textFile('scan.csv', '<!doctype html><html><body><p>Sign in</p></body></html>'),
      /web page/
    ]
  ];
  test.each(cases)('%s', async (_name, file, words) => {
    const before = await counts();
    const { status, problem } = await post(scanForm(fields(), file()));
    expect([status, problem.status]).toEqual([422, 422]);
    expect(problem.detail).toMatch(words);
    expect(problem.next.length).toBeGreaterThan(10);
    expect(await counts()).toEqual(before);
    const [entry] =
      await database.ownerSql`select t.after, f.size from trail_entries t left join raw_files f on f.sha256 = t.after->>'sha256' where t.action = 'scan.file-refused' order by t.id desc limit 1`;
    expect(Number(entry.size)).toBe(file().bytes.byteLength);
  });

  test('a descending axis is no fault: it is turned round and said so', async () => {
    const text = new TextDecoder().decode(spectrumFile('CAC', 'descending').bytes);
    const lines = text.trim().split('\n');
    const first = lines.findIndex((line) => /^\d/.test(line));
    const turned = [...lines.slice(0, first), ...lines.slice(first).reverse()].join('\n');
    const response = await app.request('/api/v1/scans', {
      method: 'POST',
      body: scanForm(fields({ barcode: lot.barcodes[3] }), textFile('scan.csv', turned)),
      token: people.operator.token
    });
    const body = (await response.json()) as { decision: { verdict: string; readNotes: string[] } };
    expect([response.status, body.decision.verdict]).toEqual([201, 'pass']);
    expect(body.decision.readNotes.join(' ')).toContain('turned round');
  });

  test('a file above the limit is refused whole', async () => {
    const { status, problem } = await post(
      scanForm(fields(), {
        fileName: 'huge.csv',
        mediaType: 'text/csv',
        bytes: new Uint8Array(21 * 1024 * 1024).fill(0x31)
      })
    );
    expect(status).toBe(413);
    expect(problem.detail).toContain('20 MB');
  });

  test('a body of 300 MB is cut off by the server, which goes on serving', async () => {
    const chunk = new Uint8Array(1024 * 1024);
    let sent = 0;
    const body = new ReadableStream<Uint8Array>({
      pull(controller) {
        if ((sent += 1) > 300) controller.close();
        else controller.enqueue(chunk);
      }
    });
    const answer = await app
      .request('/api/v1/scans', {
        method: 'POST',
        body,
        token: people.operator.token,
        headers: { 'content-type': 'multipart/form-data; boundary=x' },
        duplex: 'half'
      } as RequestInit & { token: string })
      .then(
        (response) => response.status,
        () => 'cut off'
      );
    expect(['cut off', 400, 413, 422]).toContain(answer);
    expect((await app.request('/lots', { token: people.operator.token })).status).toBe(200);
  });
});

describe('R-068, R-069: the wrong drum is stopped with a sentence', () => {
  test.each([
    ['a code of another form', 'HELLO', 422, /not a container code/],
    [
      'a misread code',
      () => lot.barcodes[0].replace(/-0001./, '-0001?'),
      422,
      /not a container code|misread/
    ],
    [
      'a code whose check character does not fit',
      () => lot.barcodes[0].slice(0, -1) + (lot.barcodes[0].endsWith('A') ? 'B' : 'A'),
      422,
      /check character/
    ],
    ['a container of another lot', () => other.barcodes[0], 409, /not to the lot in the bay/]
  ] as const)('%s', async (_name, code, status, words) => {
    const before = await counts();
    const answer = await post(
      scanForm(
        fields({ barcode: typeof code === 'string' ? code : code() }),
        spectrumFile('CAC', 'wrong drum')
      )
    );
    expect(answer.status).toBe(status);
    expect(answer.problem.detail).toMatch(words);
    expect(await counts()).toEqual(before);
  });

  test('a well-formed code that nobody issued', async () => {
    const { containerBarcode } = await import('$lib/domain/barcodes');
    const answer = await post(
      scanForm(fields({ barcode: containerBarcode('L-2026-9999', 1) }), spectrumFile('CAC', 'nobody'))
    );
    expect([answer.status, answer.problem.detail]).toEqual([
      404,
      expect.stringContaining('No container has this code')
    ]);
  });

  test('a request without a file, without an id, and one that is no form', async () => {
    expect((await post(scanForm(fields(), null))).status).toBe(422);
    expect(
      (await post(scanForm(fields({ scanId: 'x' }), spectrumFile('CAC', 'id')))).problem.fields
    ).toHaveProperty('scanId');
    const response = await app.request('/api/v1/scans', {
      method: 'POST',
      body: '{',
      token: people.operator.token,
      headers: { 'content-type': 'application/json' }
    });
    expect(response.status).toBe(422);
  });
});

describe('R-062: intake refuses what cannot be, and loses nothing that was typed', () => {
  const typed = (more: Record<string, string> = {}) => {
    const form = new FormData();
    const values = {
      deliveryNote: `N-${randomUUID().slice(0, 8)}`,
      supplierId: plant.supplierId,
      carrier: 'Mole Road Carriers',
      arrivedOn: '2026-01-05',
      condition: 'dented rim',
      'lots.0.materialId': materialId,
      'lots.0.manufacturerId': plant.manufacturerId,
      'lots.0.manufacturerBatch': 'B-77',
      'lots.0.expiresOn': '2099-01-31',
      'lots.0.retestOn': '',
      'lots.0.containerCount': '3',
      'lots.0.packaging': 'drum',
      ...more
    };
    for (const [name, value] of Object.entries(values)) form.set(name, value);
    return form;
  };
  const register = (form: FormData) =>
    app.request('/deliveries/new?/register', {
      method: 'POST',
      body: form,
      token: people.operator.token,
      headers: { accept: 'text/html' }
    });

  test.each([
    ['no container at all', { 'lots.0.containerCount': '0' }, 'at least 1 container'],
    ['ten thousand containers', { 'lots.0.containerCount': '10000' }, 'at most 2000 containers'],
    ['a number in words', { 'lots.0.containerCount': 'three' }, 'whole number'],
    ['a lot that has expired', { 'lots.0.expiresOn': '2020-01-31' }, 'has expired'],
    ['an arrival in the future', { arrivedOn: '2099-01-01' }, 'in the future'],
    ['a date that does not exist', { 'lots.0.expiresOn': '2030-02-30' }, 'does not exist'],
    ['no delivery note', { deliveryNote: ' ' }, 'Enter the delivery note number']
  ])('%s', async (_name, more, words) => {
    const before = await database.ownerSql`select count(*)::int as n from deliveries`;
    const response = await register(typed(more));
    const page = await response.text();
    expect(response.status).toBe(422);
    expect(page).toContain(words);
    // What was right stays typed.
    expect(page).toContain('value="Mole Road Carriers"');
    expect(page).toContain('value="B-77"');
    expect(page).toContain('dented rim');
    expect((await database.ownerSql`select count(*)::int as n from deliveries`)[0].n).toBe(before[0].n);
  });

  test('R-063: the same delivery note of the same supplier twice', async () => {
    const form = typed();
    expect((await register(form)).status).toBe(303);
    const again = await register(form);
    expect(again.status).toBe(409);
    expect(await again.text()).toContain('on record already');
  });
});

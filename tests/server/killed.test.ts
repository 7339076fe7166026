import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { freePort, startApplication, type RunningApplication } from '../support/application';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, type Fixtures } from '../support/fixtures';
import { makeTestPlant, scanForm, spectrumFile, type TestPlant } from '../support/plant';

const ROUNDS = 6;
const SCANS_A_ROUND = 6;

let database: TestDatabase;
let people: Fixtures['people'];
let plant: TestPlant;
let lot: Awaited<ReturnType<TestPlant['registerLot']>>;

beforeAll(async () => {
  database = await testDatabase();
  const fixtures = await makeFixtures(database.db);
  people = fixtures.people;
  plant = await makeTestPlant(database.db, fixtures);
  lot = await plant.registerLot(await plant.addDemoMaterial('CAC'), ROUNDS * SCANS_A_ROUND);
});
afterAll(() => database.close());

/** What must never be: a scan without bytes, decision or trail entry; a decision without its scan. */
async function halfRecords() {
  const [row] = await database.ownerSql`
    select
      (select count(*)::int from scans s left join raw_files f on f.id = s.raw_file_id where f.id is null or octet_length(f.bytes) = 0) as scans_without_bytes,
      (select count(*)::int from scans s left join decisions d on d.scan_id = s.id where d.id is null) as scans_without_decision,
      (select count(*)::int from scans s where (select count(*) from trail_entries t where t.action = 'scan.record' and t.record_id = s.id::text) <> 1) as scans_without_one_entry,
      (select count(*)::int from trail_entries t where t.action = 'scan.record' and not exists (select from scans s where s.id::text = t.record_id)) as entries_without_scan,
      (select count(*)::int from containers c where c.status <> 'awaiting' and not exists (select from scans s where s.container_id = c.id)) as moved_without_scan`;
  return row;
}
const NONE = {
  scans_without_bytes: 0,
  scans_without_decision: 0,
  scans_without_one_entry: 0,
  entries_without_scan: 0,
  moved_without_scan: 0
};

test('R-036, R-125: a server killed between upload and answer leaves whole records or none, and sending again records each scan once', async () => {
  const port = await freePort();
  let app: RunningApplication = await startApplication(database.appUrl, { port });
  const sent: { scanId: string; barcode: string; file: ReturnType<typeof spectrumFile> }[] = [];
  const send = (scan: (typeof sent)[number]) =>
    app.request('/api/v1/scans', {
      method: 'POST',
      token: people.operator.token,
      body: scanForm(
        { scanId: scan.scanId, barcode: scan.barcode, instrumentId: plant.instrumentId },
        scan.file
      )
    });
  let unanswered = 0;
  for (let round = 0; round < ROUNDS; round++) {
    const batch = Array.from({ length: SCANS_A_ROUND }, (_, i) => {
      const index = round * SCANS_A_ROUND + i;
      return {
        scanId: randomUUID(),
        barcode: lot.barcodes[index],
        file: spectrumFile('CAC', `drum ${index}`)
      };
    });
    sent.push(...batch);
    const answers = batch.map((scan) =>
      send(scan).then(
        (response) => response.status,
        () => null
      )
    );
    // Later in each round, so that the kill meets requests at every point of their way.
    await new Promise((resolve) => setTimeout(resolve, 6 + round * 14));
    await app.kill();
    unanswered += (await Promise.all(answers)).filter((status) => status === null).length;
    expect(await halfRecords()).toEqual(NONE);
    app = await startApplication(database.appUrl, { port });
  }
  // Otherwise the kills all came too late and the test has shown nothing.
  expect(unanswered).toBeGreaterThan(0);
  for (const scan of sent) expect([200, 201]).toContain((await send(scan)).status);
  await app.stop();
  expect(await halfRecords()).toEqual(NONE);
  const [{ scans, containers }] =
    await database.ownerSql`select count(*)::int as scans, count(distinct container_id)::int as containers from scans`;
  expect([scans, containers]).toEqual([sent.length, sent.length]);
});

test('R-047: the same id with another file is refused and changes nothing', async () => {
  const app = await startApplication(database.appUrl);
  const [first] =
    await database.ownerSql`select s.id, c.barcode from scans s join containers c on c.id = s.container_id limit 1`;
  const response = await app.request('/api/v1/scans', {
    method: 'POST',
    token: people.operator.token,
    body: scanForm(
      { scanId: String(first.id), barcode: String(first.barcode), instrumentId: plant.instrumentId },
      spectrumFile('CAC', 'another file')
    )
  });
  expect(response.status).toBe(409);
  expect(response.headers.get('content-type')).toContain('application/problem+json');
  await app.stop();
});

import { randomUUID } from 'node:crypto';
import { eq } from 'drizzle-orm';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { recordScan } from '$lib/server/commands/scans';
import { decideRepeat, requestRepeat } from '$lib/server/commands/repeats';
import { containers, lots, scans } from '$lib/server/db/schema';
import { listScans } from '$lib/server/queries/scans';
import { replayScan } from '$lib/server/queries/replay';
import { must } from '../../scripts/demo/must';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD, type Fixtures } from '../support/fixtures';
import { makeTestPlant, spectrumFile, type TestPlant } from '../support/plant';

let database: TestDatabase;
let fixtures: Fixtures;
let people: Fixtures['people'];
let plant: TestPlant;
let materialId: string;
let lot: Awaited<ReturnType<TestPlant['registerLot']>>;

beforeAll(async () => {
  database = await testDatabase();
  fixtures = await makeFixtures(database.db);
  people = fixtures.people;
  plant = await makeTestPlant(database.db, fixtures);
  materialId = await plant.addDemoMaterial('CAC');
  await plant.addDemoMaterial('SHC');
});
afterAll(() => database.close());
beforeEach(async () => {
  lot = await plant.registerLot(materialId, 2);
});

const scan = (
  itemCode: string,
  container = 0,
  more: { repeatReason?: string; scanId?: string; instrumentId?: string; brightness?: number } = {}
) =>
  recordScan(
    database.db,
    people.operator.act,
    {
      scanId: more.scanId ?? randomUUID(),
      barcode: lot.barcodes[container],
      lotId: lot.lotId,
      instrumentId: more.instrumentId ?? plant.instrumentId,
      repeatReason: more.repeatReason ?? '',
      sentLate: false,
      readOptions: {}
    },
    spectrumFile(itemCode, `${container} ${more.repeatReason ?? 'first'}`, { brightness: more.brightness })
  );
const statusOf = async (container = 0) => {
  const [row] = await database.db
    .select()
    .from(containers)
    .where(eq(containers.id, lot.containerIds[container]));
  return row.status;
};
const entries = async (action: string) =>
  (
    await database.ownerSql`select count(*)::int as n from trail_entries where action = ${action} and lot_id = ${lot.lotId}`
  )[0].n as number;

describe('R-072: no testing into compliance', () => {
  test('a pass is a pass, and the container is done', async () => {
    expect(must(await scan('CAC')).decision.verdict).toBe('pass');
    expect(await statusOf()).toBe('pass');
    const again = await scan('CAC', 0, { repeatReason: 'once more' });
    expect(again).toMatchObject({
      ok: false,
      code: 'wrong-state',
      detail: expect.stringContaining('already passed')
    });
  });

  test('a fail locks the container and opens a deviation', async () => {
    expect(must(await scan('SHC')).decision.verdict).toBe('fail');
    expect(await statusOf()).toBe('fail');
    expect(await scan('CAC', 0, { repeatReason: 'wrong drum opened' })).toMatchObject({
      ok: false,
      detail: expect.stringContaining('only an approver')
    });
    const [deviation] =
      await database.ownerSql`select origin, phase from deviations where lot_id = ${lot.lotId}`;
    expect(deviation).toMatchObject({ origin: 'fail', phase: 'assess' });
    const [mail] = await database.ownerSql`
      select to_address, subject, body from outbox_mails where kind = 'scan-failed' order by created_at desc limit 1`;
    expect(mail.to_address).toBe('approver@example.test');
    // A link and no result: mail is read by others too.
    expect(mail.body).toContain(`/lots/${lot.lotId}`);
    expect(mail.body).not.toMatch(/carbonate|correlation|score/);
  });

  test("R-049: a repeat needs an approver's signed grant, works once, and both results stay", async () => {
    const first = must(await scan('SHC'));
    const request = must(
      await requestRepeat(
        database.db,
        people.operator.act,
        first.scanId,
        'Wrong drum opened',
        'The drum beside it was opened'
      )
    );
    expect(
      await requestRepeat(database.db, people.operator.act, first.scanId, 'again', 'impatient')
    ).toMatchObject({ ok: false, code: 'already-exists' });
    const decision = {
      requestId: request.id,
      outcome: 'granted' as const,
      reason: 'Cause is plain',
      password: PASSWORD
    };
    expect(await decideRepeat(database.db, people.operator.act, decision)).toMatchObject({
      ok: false,
      code: 'not-allowed'
    });
    expect(
      await decideRepeat(database.db, people.approver.act, { ...decision, password: 'not my password' })
    ).toMatchObject({ ok: false, code: 'signature-wrong' });
    must(await decideRepeat(database.db, people.approver.act, decision));
    expect(must(await scan('CAC', 0, { repeatReason: 'right drum this time' })).decision.verdict).toBe(
      'pass'
    );
    const attempts = (await listScans(database.db, lot.lotId)).map((row) => [row.attempt, row.verdict]);
    expect(attempts).toEqual([
      [1, 'fail'],
      [2, 'pass']
    ]);
    expect(await entries('repeat.request')).toBe(1);
    expect(await entries('repeat.grant')).toBe(1);
  });

  test('nobody grants their own request', async () => {
    const both = await fixtures.addPerson(`both-${randomUUID().slice(0, 6)}`, ['operator', 'approver']);
    const first = must(await scan('SHC'));
    const request = must(await requestRepeat(database.db, both.act, first.scanId, 'Other', 'because'));
    expect(
      await decideRepeat(database.db, both.act, {
        requestId: request.id,
        outcome: 'granted',
        reason: 'mine',
        password: PASSWORD
      })
    ).toMatchObject({ ok: false, code: 'own-work' });
  });

  test('no result may be measured again with a reason, up to the limit, then the container is set aside', async () => {
    const dim = { brightness: 30 };
    expect(must(await scan('CAC', 0, dim)).decision.verdict).toBe('invalid');
    expect(await scan('CAC', 0, dim)).toMatchObject({ ok: false, detail: expect.stringContaining('why') });
    expect(must(await scan('CAC', 0, { ...dim, repeatReason: 'wiped the window' })).decision.verdict).toBe(
      'invalid'
    );
    expect(await statusOf()).toBe('awaiting');
    expect(must(await scan('CAC', 0, { ...dim, repeatReason: 'pressed firmly' })).decision.verdict).toBe(
      'invalid'
    );
    expect(await statusOf()).toBe('set_aside');
    expect(await scan('CAC', 0, { repeatReason: 'once more' })).toMatchObject({
      ok: false,
      detail: expect.stringContaining('set aside')
    });
  });
});

describe('what a scan needs', () => {
  test('R-080: a scan on an instrument without a valid check gives no result', async () => {
    const outcome = must(await scan('CAC', 0, { instrumentId: plant.uncheckedId }));
    expect([outcome.decision.verdict, outcome.decision.explanation.decidedBy]).toEqual([
      'invalid',
      'check-missing'
    ]);
  });

  test('R-003: it is for operators', async () => {
    const outcome = await recordScan(
      database.db,
      people.approver.act,
      {
        scanId: randomUUID(),
        barcode: lot.barcodes[0],
        instrumentId: plant.instrumentId,
        repeatReason: '',
        sentLate: false,
        readOptions: {}
      },
      spectrumFile('CAC', 'approver')
    );
    expect(outcome).toMatchObject({ ok: false, code: 'not-allowed' });
  });

  test('two people at one drum at the same moment: one scan is recorded first, the other is told', async () => {
    const answers = await Promise.all([scan('CAC'), scan('CAC')]);
    expect(answers.map((answer) => (answer.ok ? 'recorded' : answer.code)).sort()).toEqual([
      'recorded',
      'wrong-state'
    ]);
    expect(await database.db.$count(scans, eq(scans.lotId, lot.lotId))).toBe(1);
  });

  test('R-047: the same scan sent six times at once is one scan', async () => {
    const scanId = randomUUID();
    const answers = await Promise.all(Array.from({ length: 6 }, () => scan('CAC', 0, { scanId })));
    expect(answers.every((answer) => answer.ok)).toBe(true);
    expect(answers.filter((answer) => answer.ok && !answer.value.repeated)).toHaveLength(1);
    expect(await database.db.$count(scans, eq(scans.lotId, lot.lotId))).toBe(1);
  });

  test('when every container has passed the lot goes to review', async () => {
    must(await scan('CAC', 0));
    must(await scan('CAC', 1));
    const [row] = await database.db.select().from(lots).where(eq(lots.id, lot.lotId));
    expect(row.status).toBe('under_review');
  });

  test('R-048: the stored bytes are the sent bytes, and the decision computes again to the last bit', async () => {
    const { scanId } = must(await scan('CAC'));
    const [row] =
      await database.ownerSql`select f.bytes, f.sha256, encode(sha256(f.bytes), 'hex') as again from scans s join raw_files f on f.id = s.raw_file_id where s.id = ${scanId}`;
    expect(Buffer.from(row.bytes as Buffer).equals(Buffer.from(spectrumFile('CAC', '0 first').bytes))).toBe(
      true
    );
    expect(row.again).toBe(row.sha256);
    expect(await replayScan(database.db, scanId)).toMatchObject({ identical: true });
  });

  test('R-036: when the trail cannot be written nothing is', async () => {
    await database.ownerSql`alter table trail_entries add constraint closed check (action <> 'scan.record') not valid`;
    await expect(scan('CAC')).rejects.toThrow();
    await database.ownerSql`alter table trail_entries drop constraint closed`;
    expect(await database.db.$count(scans, eq(scans.lotId, lot.lotId))).toBe(0);
    expect(await statusOf()).toBe('awaiting');
  });

  test("R-115: the record's time is the server's, whatever the sender's clock says", async () => {
    const yesterday = new Date(Date.now() - 86_400_000).toISOString();
    const scanId = randomUUID();
    must(
      await recordScan(
        database.db,
        people.operator.act,
        {
          scanId,
          barcode: lot.barcodes[0],
          instrumentId: plant.instrumentId,
          repeatReason: '',
          sentLate: false,
          readOptions: {},
          clientTime: yesterday
        },
        spectrumFile('CAC', 'clock')
      )
    );
    const [row] = await database.ownerSql`
      select client_time, abs(extract(epoch from clock_timestamp() - recorded_at))::float as seconds from scans where id = ${scanId}`;
    expect((row.client_time as Date).toISOString()).toBe(yesterday);
    expect(row.seconds).toBeLessThan(60);
  });

  test('R-038: each act is an entry of its own, at its own time', async () => {
    must(await scan('CAC', 0));
    must(await scan('CAC', 1));
    const rows =
      await database.ownerSql`select id, at::text from trail_entries where lot_id = ${lot.lotId} order by id`;
    expect(new Set(rows.map((row) => row.at)).size).toBe(rows.length);
    expect(await entries('scan.record')).toBe(2);
  });
});

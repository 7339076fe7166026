import { randomUUID } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { attachPaper, disposeLot, recordLimitTest, setContainersAside } from '$lib/server/commands/lots';
import { concludeDeviation } from '$lib/server/commands/deviations';
import { recordScan } from '$lib/server/commands/scans';
import { dispositionPreview } from '$lib/server/queries/dispositionRecord';
import { getLot, getReleaseConditions } from '$lib/server/queries/lots';
import { verifySignature } from '$lib/server/platform/verifySignature';
import type { Act } from '$lib/server/platform/act';
import { must } from '../../scripts/demo/must';
import { demoPaper } from '../../scripts/demo/demoPaper';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD, type Fixtures } from '../support/fixtures';
import { makeTestPlant, spectrumFile, type TestPlant } from '../support/plant';

type Lot = Awaited<ReturnType<TestPlant['registerLot']>>;
let database: TestDatabase;
let fixtures: Fixtures;
let people: Fixtures['people'];
let plant: TestPlant;
let materialId: string;
let riskyId: string;

beforeAll(async () => {
  database = await testDatabase();
  fixtures = await makeFixtures(database.db);
  people = fixtures.people;
  plant = await makeTestPlant(database.db, fixtures);
  materialId = await plant.addDemoMaterial('CAC');
  await plant.addDemoMaterial('SHC');
  const references = [1, 2, 3, 4, 5].map((lot) =>
    spectrumFile('GLY', `reference ${lot}`, { lotSeed: `GLY reference lot ${lot}` })
  );
  riskyId = await plant.addMaterial('GLY', references, { degEgHighRisk: true });
});
afterAll(() => database.close());

const scanAll = async (lot: Lot, itemCode: string, act: Act = people.operator.act) => {
  for (const barcode of lot.barcodes) {
    must(
      await recordScan(
        database.db,
        act,
        {
          scanId: randomUUID(),
          barcode,
          instrumentId: plant.instrumentId,
          repeatReason: '',
          sentLate: false,
          readOptions: {}
        },
        spectrumFile(itemCode, `drum ${barcode}`)
      )
    );
  }
};
const paper = (lot: Lot) =>
  attachPaper(
    database.db,
    people.operator.act,
    lot.lotId,
    'certificate_of_analysis',
    '',
    demoPaper(lot.lotNumber)
  );
const detailOf = async (lot: Lot) => {
  const detail = await getLot(database.db, fixtures.siteId, lot.lotId);
  if (!detail) throw new Error('the lot vanished');
  return detail;
};
async function decide(
  lot: Lot,
  act: Act,
  more: { outcome?: 'release' | 'reject'; reason?: string; password?: string; seen?: string } = {}
) {
  const outcome = more.outcome ?? 'release';
  const seenSha256 = more.seen ?? (await dispositionPreview(await detailOf(lot), outcome)).sha256;
  return disposeLot(database.db, act, {
    lotId: lot.lotId,
    outcome,
    reason: more.reason ?? 'All drums passed',
    password: more.password ?? PASSWORD,
    seenSha256,
    origin: 'http://127.0.0.1'
  });
}
/** A lot that meets every condition of release. */
async function readyLot(): Promise<Lot> {
  const lot = await plant.registerLot(materialId, 2);
  await scanAll(lot, 'CAC');
  must(await paper(lot));
  return lot;
}

describe('R-061, R-074: a lot is released only when nothing is missing', () => {
  test('a ready lot is released by an approver, with a certificate and a signature that holds', async () => {
    const lot = await readyLot();
    const { certificateId } = must(await decide(lot, people.approver.act));
    expect((await detailOf(lot)).lot.status).toBe('released');
    const [row] =
      await database.ownerSql`select c.pdf, d.signature_id from certificates c join dispositions d on d.id = c.disposition_id where c.id = ${certificateId}`;
    expect(
      Buffer.from(row.pdf as Buffer)
        .subarray(0, 5)
        .toString()
    ).toBe('%PDF-');
    expect(await verifySignature(database.db, String(row.signature_id))).toMatchObject({ valid: true });
    expect(await decide(lot, people.approver.act)).toMatchObject({ ok: false, code: 'wrong-state' });
  });

  test('not every container passed', async () => {
    const lot = await plant.registerLot(materialId, 2);
    must(await paper(lot));
    expect(await decide(lot, people.approver.act)).toMatchObject({
      ok: false,
      code: 'wrong-state',
      detail: expect.stringContaining('0 of 2 planned containers passed')
    });
  });

  test('R-066: no paper', async () => {
    const lot = await plant.registerLot(materialId, 1);
    await scanAll(lot, 'CAC');
    expect(await decide(lot, people.approver.act)).toMatchObject({
      ok: false,
      detail: expect.stringContaining('No certificate of analysis')
    });
  });

  test('a failed drum and its open deviation', async () => {
    const lot = await plant.registerLot(materialId, 1);
    await scanAll(lot, 'SHC');
    must(await paper(lot));
    expect(await decide(lot, people.approver.act)).toMatchObject({
      ok: false,
      detail: expect.stringMatching(/Failed, undecided or set aside.*Open: DEV-/s)
    });
    const [{ id }] = (await detailOf(lot)).deviations;
    const conclusion = {
      id,
      causeCategory: 'wrong_material',
      cause: 'Wrong drum delivered',
      impact: 'This lot only',
      action: 'Returned',
      password: PASSWORD
    };
    expect(
      await concludeDeviation(database.db, people.approver.act, { ...conclusion, cause: '' })
    ).toMatchObject({ ok: false, fields: { cause: expect.any(String) } });
    must(await concludeDeviation(database.db, people.approver.act, conclusion));
    expect(await decide(lot, people.approver.act)).toMatchObject({ ok: false });
    must(await decide(lot, people.approver.act, { outcome: 'reject', reason: 'Wrong material' }));
    expect((await detailOf(lot)).lot.status).toBe('rejected');
  });

  test('R-067: a high-risk material waits for its glycol limit test', async () => {
    const lot = await plant.registerLot(riskyId, 1);
    await scanAll(lot, 'GLY');
    must(await paper(lot));
    expect(await decide(lot, people.approver.act)).toMatchObject({
      ok: false,
      detail: expect.stringContaining('does not replace it')
    });
    must(await recordLimitTest(database.db, people.approver.act, lot.lotId, 'complies', 'LT-7'));
    must(await decide(lot, people.approver.act));
  });

  test('a set-aside drum', async () => {
    const lot = await readyLot();
    must(
      await setContainersAside(database.db, people.operator.act, lot.lotId, [lot.containerIds[1]], 'leaking')
    );
    expect(await decide(lot, people.approver.act)).toMatchObject({
      ok: false,
      detail: expect.stringContaining('container 2')
    });
  });
});

describe('R-025: a second person', () => {
  test('who scanned a lot does not decide it, by command and by SQL', async () => {
    const both = await fixtures.addPerson(`both-${randomUUID().slice(0, 6)}`, ['operator', 'approver']);
    const lot = await plant.registerLot(materialId, 1);
    await scanAll(lot, 'CAC', both.act);
    must(await paper(lot));
    expect(await decide(lot, both.act)).toMatchObject({ ok: false, code: 'own-work' });
    expect(await decide(lot, both.act, { outcome: 'reject', reason: 'mine' })).toMatchObject({
      ok: false,
      code: 'own-work'
    });
    await expect(
      database.db.execute(`update lots set status = 'released' where id = '${lot.lotId}'`)
    ).rejects.toThrow();
  });

  test('only an approver decides', async () => {
    const lot = await readyLot();
    for (const role of ['operator', 'method_owner', 'auditor', 'administrator'] as const) {
      expect(await decide(lot, people[role].act)).toMatchObject({ ok: false, code: 'not-allowed' });
    }
  });
});

describe('R-021, R-030: the signature', () => {
  test('a wrong password signs nothing and is on the trail', async () => {
    const lot = await readyLot();
    expect(await decide(lot, people.approver.act, { password: 'not my password' })).toMatchObject({
      ok: false,
      code: 'signature-wrong'
    });
    expect((await detailOf(lot)).lot.status).toBe('under_review');
    const [{ n }] =
      await database.ownerSql`select count(*)::int as n from trail_entries where action = 'signature.refused' and actor_id = ${people.approver.id}`;
    expect(n).toBeGreaterThan(0);
  });

  test('a lot that changed since it was read is not signed', async () => {
    const lot = await readyLot();
    const seen = (await dispositionPreview(await detailOf(lot), 'release')).sha256;
    must(await paper(lot));
    expect(await decide(lot, people.approver.act, { seen })).toMatchObject({
      ok: false,
      code: 'changed-meanwhile'
    });
  });

  test('R-031: rejecting needs a reason too', async () => {
    const lot = await readyLot();
    expect(await decide(lot, people.approver.act, { outcome: 'reject', reason: ' ' })).toMatchObject({
      ok: false,
      fields: { reason: expect.any(String) }
    });
  });

  test('two approvers at once: one decides, the other is told', async () => {
    const second = await fixtures.addPerson(`second-${randomUUID().slice(0, 6)}`, ['approver']);
    const lot = await readyLot();
    const answers = await Promise.all([
      decide(lot, people.approver.act),
      decide(lot, second.act, { outcome: 'reject', reason: 'No' })
    ]);
    expect(answers.map((answer) => answer.ok).sort()).toEqual([false, true]);
  });
});

test('R-130: a paper is told by its content, not by its name', async () => {
  const lot = await plant.registerLot(materialId, 1);
  const page = {
    fileName: 'coa.pdf',
    mediaType: 'application/pdf',
    bytes: new TextEncoder().encode('<html>not a pdf</html>')
  };
  expect(
    await attachPaper(database.db, people.operator.act, lot.lotId, 'certificate_of_analysis', '', page)
  ).toMatchObject({ ok: false, code: 'bad-input' });
  const huge = { ...page, bytes: new Uint8Array(16 * 1024 * 1024) };
  expect(
    await attachPaper(database.db, people.operator.act, lot.lotId, 'photograph', '', huge)
  ).toMatchObject({ ok: false, code: 'too-large' });
  const conditions = await getReleaseConditions(database.db, await detailOf(lot), people.approver.id, 'UTC');
  expect(conditions.find((condition) => condition.code === 'papers')?.met).toBe(false);
});

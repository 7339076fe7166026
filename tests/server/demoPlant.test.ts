import { mkdtempSync, readdirSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Verdict } from '$lib/identity/decision';
import { CONTAINER_STATUSES } from '$lib/domain/containers';
import { LOT_STATUSES } from '$lib/domain/lots';
import { sealNow } from '$lib/server/platform/sealer';
import { DELIVERIES, scansOf } from '../../scripts/demo/deliveries';
import { makeDeliveries, type MadeLot } from '../../scripts/demo/makeDeliveries';
import { makePlant } from '../../scripts/demo/makePlant';
import { writeSamples } from '../../scripts/demo/samples';
import { testDatabase, type TestDatabase } from '../support/database';

interface ScanRow {
  readonly lot: string;
  readonly container: number;
  readonly attempt: number;
  readonly verdict: Verdict;
  readonly reason: string;
}

let database: TestDatabase;
let lots: MadeLot[];
let scans: readonly ScanRow[];
beforeAll(async () => {
  database = await testDatabase();
  const plant = await makePlant(database.db);
  await sealNow(database.db);
  lots = await makeDeliveries(database.db, plant);
  scans = await database.ownerSql<ScanRow[]>`
    select l.lot_number as lot, c.number as container, s.attempt, d.verdict,
      convert_from(d.result, 'UTF8')::jsonb->'explanation'->>'reason' as reason
    from scans s join decisions d on d.scan_id = s.id
      join containers c on c.id = s.container_id join lots l on l.id = s.lot_id
    order by s.recorded_at`;
}, 300_000);
afterAll(() => database.close());

describe('the demo plant (DESIGN: demo scenario)', () => {
  it('every scan comes out as the scenario says', () => {
    const said = DELIVERIES.flatMap(({ lots }) => lots).flatMap(scansOf);
    expect(scans.map(({ container, verdict }) => ({ container, verdict }))).toEqual(
      said.map(({ container, verdict }) => ({ container, verdict }))
    );
  });

  it('has lots and containers in every state but those that a person must bring about later', async () => {
    const statuses = await database.ownerSql<{ status: string }[]>`select distinct status from lots`;
    expect(statuses.map(({ status }) => status).sort()).toEqual(
      LOT_STATUSES.filter((status) => status !== 'held').sort()
    );
    const containers = new Set(lots.flatMap((lot) => lot.containers.map(({ status }) => status)));
    expect([...containers].sort()).toEqual(
      CONTAINER_STATUSES.filter((status) => status !== 'inconclusive').sort()
    );
  });

  it('the fluorescent lot is told to be fluorescent, and its sack waits for a person after three tries', () => {
    const invalid = scans.filter(({ verdict }) => verdict === 'invalid');
    expect(invalid.map(({ attempt }) => attempt)).toEqual([1, 1, 2, 3]);
    for (const { reason } of invalid) expect(reason).toMatch(/^Fluorescence swamps the bands/);
  });

  it('the drift of RM-2 is on record, check by check, every one passed and the last near its limit', async () => {
    const checks = await database.ownerSql<{ passed: boolean; shift: number }[]>`
      select passed, axis_shift_cm1 as shift from performance_checks p
        join instruments i on i.id = p.instrument_id where i.name = 'RM-2' order by performed_at`;
    expect(checks.every(({ passed }) => passed)).toBe(true);
    expect(checks).toHaveLength(6);
    const shifts = checks.map(({ shift }) => Number(shift));
    shifts.slice(1).forEach((shift, i) => expect(shift).toBeGreaterThan(shifts[i]));
  });

  it('one method version is superseded, one waits for approval, and what cannot have a method has none', async () => {
    const versions = await database.ownerSql<{ code: string; status: string }[]>`
      select m.code, v.status from method_versions v join methods m on m.id = v.method_id
        where v.status <> 'effective' order by 1, 2`;
    expect(versions.map(({ code, status }) => `${code} ${status}`)).toEqual([
      'IBU-ID in_review',
      'LAC-M-ID superseded'
    ]);
    const without = await database.ownerSql<{ code: string }[]>`
      select item_code as code from materials where id not in (select material_id from methods) order by 1`;
    expect(without.map(({ code }) => code)).toEqual(['CHA', 'NAC']);
  });

  it('a repeat waits, another was granted and used, and both results of it stay', async () => {
    const requests = await database.ownerSql<{ outcome: string | null; used: boolean }[]>`
      select outcome, used_by_scan_id is not null as used from repeat_requests order by requested_at`;
    expect(requests.map((row) => ({ ...row }))).toEqual([
      { outcome: null, used: false },
      { outcome: 'granted', used: true }
    ]);
    const twice = scans.filter(({ attempt, verdict }) => attempt === 2 && verdict === 'pass');
    expect(twice).toHaveLength(1);
    const both = scans.filter(
      ({ lot, container }) => lot === twice[0].lot && container === twice[0].container
    );
    expect(both.map(({ verdict }) => verdict)).toEqual(['fail', 'pass']);
  });

  it('released lots have a certificate each; the lot of glycerol without a limit test does not', async () => {
    const released = await database.ownerSql<{ code: string }[]>`
      select m.item_code as code from certificates c join lots l on l.id = c.lot_id
        join materials m on m.id = l.material_id order by 1`;
    expect(released.map(({ code }) => code)).toEqual(['ASC', 'LAC-M', 'PRG']);
  });

  it('leaves a file for every container that can be scanned now, each said to be invented', () => {
    const folder = mkdtempSync(join(tmpdir(), 'demo-spectra-'));
    try {
      writeSamples(folder, lots);
      const files = readdirSync(folder);
      const waiting = lots
        .filter(({ itemCode }) => itemCode !== 'NAC')
        .flatMap(({ containers }) => containers.filter(({ status }) => status === 'awaiting'));
      expect(files.filter((name) => name.startsWith('L-'))).toHaveLength(waiting.length);
      expect(files.filter((name) => name.startsWith('polystyrene-'))).toHaveLength(3);
      for (const name of files)
        expect(readFileSync(join(folder, name), 'utf8')).toMatch(/DEMO: invented data/);
    } finally {
      rmSync(folder, { recursive: true });
    }
  });
});

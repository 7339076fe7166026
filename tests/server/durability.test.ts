import { execFileSync } from 'node:child_process';
import { randomUUID } from 'node:crypto';
import { chmodSync, mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import postgres from 'postgres';
import { connect } from '$lib/server/db/client';
import { localUrl } from '../../scripts/lib/databaseUrls.mjs';
import { makeCluster, startCluster, stopCluster } from '../../scripts/lib/postgresCluster.mjs';
import { ensurePrograms, serverAccount } from '../../scripts/lib/postgresPrograms.mjs';
import { migrateDatabase } from '../../scripts/migrate';
import { startApplication } from '../support/application';
import { makeFixtures, type Fixtures } from '../support/fixtures';
import { makeTestPlant, scanForm, spectrumFile, type TestPlant } from '../support/plant';

/** A server of its own, with the disk flushed at each commit, which the test kills without warning. */
const ROUNDS = 4;
const CLIENTS = 8;
const IN_FLIGHT = 25;
const PASSWORD = 'durability-test';

let base: string;
let cluster: Parameters<typeof makeCluster>[0];
let port: number;
let people: Fixtures['people'];
let plant: TestPlant;
let barcodes: string[];
let next = 0;

const url = (role: string) => localUrl({ role, password: PASSWORD, port, database: 'wharfinger' });
const admin = async (statement: string) => {
  const sql = postgres(url('postgres'), { max: 1, onnotice: () => {} });
  const rows = await sql.unsafe(statement);
  await sql.end();
  return rows;
};

beforeAll(async () => {
  const account = await serverAccount();
  base = mkdtempSync('/var/tmp/wharfinger-durability-');
  chmodSync(base, 0o711);
  cluster = { folder: join(base, 'postgres'), programs: await ensurePrograms({ say: () => {} }), account };
  await makeCluster(cluster, { superuserPassword: PASSWORD, ownerPassword: PASSWORD, data: base });
  port = await startCluster(cluster);
  await migrateDatabase(url('wharfinger_owner'), PASSWORD);
  const app = connect(url('wharfinger_app'));
  const fixtures = await makeFixtures(app.db);
  people = fixtures.people;
  plant = await makeTestPlant(app.db, fixtures);
  const materialId = await plant.addDemoMaterial('CAC');
  barcodes = [];
  for (let i = 0; i < 4; i++) barcodes.push(...(await plant.registerLot(materialId, 1500)).barcodes);
  await app.close();
});
afterAll(async () => {
  await stopCluster(cluster).catch(() => {});
  rmSync(base, { recursive: true, force: true });
});

/** SIGKILL for the server and all its processes at once, as a machine that dies gives none of them time. */
async function killServer(): Promise<void> {
  const pid = Number(readFileSync(join(cluster.folder, 'cluster', 'postmaster.pid'), 'utf8').split('\n')[0]);
  const children = execFileSync('ps', ['-o', 'pid=', '--ppid', String(pid)], { encoding: 'utf8' })
    .trim()
    .split(/\s+/)
    .map(Number);
  for (const process_ of [pid, ...children]) {
    try {
      process.kill(process_, 'SIGKILL');
    } catch {
      // It ended by itself in between.
    }
  }
  await expect.poll(() => isAlive(pid), { timeout: 10_000 }).toBe(false);
}

function isAlive(pid: number): boolean {
  try {
    return process.kill(pid, 0);
  } catch {
    return false;
  }
}

/** Scans from eight clients over HTTP until the server is killed: all that were sent, and those answered as recorded. */
async function scanUntilKilled(): Promise<{ sent: string[]; acked: string[] }> {
  const app = await startApplication(url('wharfinger_app'));
  const acked: string[] = [];
  const sent: string[] = [];
  const file = spectrumFile('CAC', 'durable');
  let killed = false;
  const client = async () => {
    while (!killed && next < barcodes.length) {
      const scanId = randomUUID();
      sent.push(scanId);
      const fields = { scanId, barcode: barcodes[next++], instrumentId: plant.instrumentId };
      try {
        const response = await app.request('/api/v1/scans', {
          method: 'POST',
          body: scanForm(fields, file),
          token: people.operator.token
        });
        if (response.status === 201) acked.push(scanId);
      } catch {
        return;
      }
    }
  };
  const clients = Array.from({ length: CLIENTS }, client);
  // In full flight, whatever the machine's speed.
  await expect.poll(() => acked.length, { timeout: 40_000, interval: 5 }).toBeGreaterThan(IN_FLIGHT);
  await killServer();
  killed = true;
  await Promise.race([Promise.all(clients), new Promise((resolve) => setTimeout(resolve, 8000))]);
  await app.kill();
  port = await startCluster(cluster, port);
  return { sent, acked };
}

async function missing(acked: readonly string[]): Promise<number> {
  const rows = await admin('select id::text as id from scans');
  const stored = new Set(rows.map((row) => String(row.id)));
  return acked.filter((id) => !stored.has(id)).length;
}

test(
  'R-125: no scan that was answered as recorded is missing after the database server is killed',
  { timeout: 120_000 },
  async () => {
    const acked: string[] = [];
    const sent: string[] = [];
    for (let round = 0; round < ROUNDS; round++) {
      const of = await scanUntilKilled();
      acked.push(...of.acked);
      sent.push(...of.sent);
    }
    console.log(`${acked.length} scans were answered in ${ROUNDS} rounds`);
    expect(acked.length).toBeGreaterThan(50);
    expect(await missing(acked)).toBe(0);
    // The control: had the server answered before its commit, these are the scans that would be missed.
    expect(await missing(sent)).toBeGreaterThan(0);
    const [half] = await admin(`select
    (select count(*)::int from scans s left join decisions d on d.scan_id = s.id where d.id is null) as undecided,
    (select count(*)::int from scans s where not exists (select from trail_entries t where t.record_id = s.id::text and t.action = 'scan.record')) as untold,
    (select count(*)::int from (select container_id from scans group by 1 having count(*) > 1) twice) as twice`);
    expect(half).toMatchObject({ undecided: 0, untold: 0, twice: 0 });
  }
);

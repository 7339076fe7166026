import {
  existsSync,
  mkdirSync,
  mkdtempSync,
  chmodSync,
  readFileSync,
  realpathSync,
  rmSync,
  statSync,
  writeFileSync
} from 'node:fs';
import { join } from 'node:path';
import postgres from 'postgres';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { findCluster } from '../../scripts/lib/clusterPlace.mjs';
import { startOwnDatabase } from '../../scripts/lib/ownDatabase.mjs';
import { diskFullSentence } from '../../scripts/lib/plainStop.mjs';
import { explainFailure, runningPort } from '../../scripts/lib/postgresCluster.mjs';
import { listPrograms, choosePrograms, serverAccount } from '../../scripts/lib/postgresPrograms.mjs';

/** A data folder where the database account can enter: /var/tmp is open on every Debian. */
function dataFolder() {
  const folder = realpathSync(mkdtempSync('/var/tmp/wharfinger-cluster-test-'));
  chmodSync(folder, 0o711);
  return folder;
}

describe('the private cluster, for real', { timeout: 120_000 }, () => {
  const base = dataFolder();
  const data = join(base, 'data');
  const said: string[] = [];
  const open = () => startOwnDatabase({ data, say: (line) => said.push(line) });

  beforeAll(() => mkdirSync(data));
  afterAll(() => rmSync(base, { recursive: true, force: true }));

  it('is made, keeps what is stored over a restart, and starts without being made again', async () => {
    const first = await open();
    const owner = postgres(first.database.ownerUrl, { max: 1 });
    await owner`create table drums (n int)`;
    await owner`insert into drums values (17)`;
    const [who] =
      await owner`select current_user, rolsuper, rolcreaterole, current_setting('data_checksums') as sums,
      current_setting('listen_addresses') as listens,
      current_setting('server_encoding') as encoding, current_setting('timezone') as zone
      from pg_roles where rolname = current_user`;
    expect(who).toEqual({
      current_user: 'wharfinger_owner',
      rolsuper: false,
      rolcreaterole: true,
      sums: 'on',
      listens: '127.0.0.1',
      encoding: 'UTF8',
      zone: 'UTC'
    });
    await owner.end();
    await first.database.stop?.();
    await expect(
      postgres(first.database.ownerUrl, { max: 1, connect_timeout: 2 })`select 1`
    ).rejects.toThrow();

    said.length = 0;
    const second = await open();
    expect(second.database.ownerUrl).toBe(first.database.ownerUrl);
    const again = postgres(second.database.ownerUrl, { max: 1 });
    expect(await again`select n from drums`).toEqual([{ n: 17 }]);
    await again.end();
    expect(said).toEqual([]);
    await second.database.stop?.();
  });

  it('refuses a wrong password', async () => {
    const { database } = await open();
    const url = new URL(database.ownerUrl);
    url.password = 'wrong';
    await expect(postgres(url.href, { max: 1 })`select 1`).rejects.toThrow(/password authentication failed/);
    await database.stop?.();
  });

  it('takes over a server that a killed start left running', async () => {
    const first = await open();
    const second = await open();
    expect(second.database.ownerUrl).toBe(first.database.ownerUrl);
    await second.database.stop?.();
    const programs = choosePrograms(await listPrograms());
    const cluster = { folder: join(data, 'postgres'), programs: programs!, account: await serverAccount() };
    expect(await runningPort(cluster)).toBeNull();
  });

  it('does not open a database whose passwords are lost', async () => {
    const secrets = readFileSync(join(data, 'secrets.json'));
    rmSync(join(data, 'secrets.json'));
    await expect(open()).rejects.toThrow('with its passwords is not');
    expect(existsSync(join(data, 'secrets.json'))).toBe(false);
    writeFileSync(join(data, 'secrets.json'), secrets, { mode: 0o600 });
    await (await open()).database.stop?.();
  });

  it('does not make an empty database where the real one is missing', async () => {
    rmSync(join(data, 'postgres', 'ready.json'));
    await expect(open()).rejects.toThrow('it is not there or not complete');
  });
});

describe('where the cluster lies', () => {
  it('stops at a half-made one with a sentence and touches nothing', async () => {
    const data = dataFolder();
    mkdirSync(join(data, 'postgres', 'cluster'), { recursive: true });
    writeFileSync(join(data, 'postgres', 'cluster', 'PG_VERSION'), '15\n');
    const before = statSync(join(data, 'postgres', 'cluster')).mtimeMs;
    await expect(startOwnDatabase({ data, say: () => {} })).rejects.toThrow(/never finished.*left untouched/);
    expect(statSync(join(data, 'postgres', 'cluster')).mtimeMs).toBe(before);
    expect(existsSync(join(data, 'secrets.json'))).toBe(false);
    rmSync(data, { recursive: true });
  });

  it('is the data folder, unless the database account cannot enter that', async () => {
    const base = dataFolder();
    const data = join(base, 'data');
    mkdirSync(data);
    const account = await serverAccount();
    expect(await findCluster(data, account)).toEqual({
      folder: join(data, 'postgres'),
      state: 'to make',
      moved: false
    });
    chmodSync(base, 0o700);
    const place = await findCluster(data, account);
    if (account === null) expect(place.moved).toBe(false);
    else
      expect(place).toMatchObject({
        moved: true,
        folder: expect.stringMatching(/^\/var\/tmp\/wharfinger-[0-9a-f]{12}$/)
      });
    rmSync(base, { recursive: true });
  });

  it('is not shared between a data folder and its copy', async () => {
    const base = dataFolder();
    const outside = join(base, 'outside');
    const [original, copy] = [join(base, 'original'), join(base, 'copy')];
    for (const folder of [original, copy, join(outside, 'cluster')]) mkdirSync(folder, { recursive: true });
    for (const data of [original, copy]) {
      writeFileSync(join(data, 'cluster.json'), JSON.stringify({ folder: outside, port: 5555 }));
    }
    writeFileSync(join(outside, 'ready.json'), JSON.stringify({ major: 15, data: original }));
    writeFileSync(join(outside, 'cluster', 'PG_VERSION'), '15\n');
    const account = await serverAccount();
    expect(await findCluster(original, account)).toMatchObject({ folder: outside, state: 'ready' });
    await expect(findCluster(copy, account)).rejects.toThrow(`${copy} is a copy of ${original}`);
    rmSync(original, { recursive: true });
    expect(await findCluster(copy, account)).toMatchObject({ folder: outside, state: 'ready' });
    rmSync(base, { recursive: true });
  });
});

describe('what is said when PostgreSQL will not', () => {
  it('names a full disk as such', () => {
    const outputs = [
      'FATAL:  could not write to file "pg_wal/xlogtemp.19": No space left on device',
      'FATAL:  could not extend file "base/1/2691": wrote only 4096 of 8192 bytes\nHINT:  Check free disk space.'
    ];
    for (const output of outputs)
      expect(explainFailure('started', output, '/x/data')).toBe(diskFullSentence('/x/data'));
  });

  it('passes on the telling lines and says that the data is untouched', () => {
    const output = '2026-01-01 LOG:  starting\n2026-01-01 FATAL:  data directory has wrong ownership\n';
    const sentence = explainFailure('started', output, '/x/data');
    expect(sentence).toContain('What is stored in it is untouched.');
    expect(sentence).toContain('FATAL:  data directory has wrong ownership');
    expect(sentence).not.toContain('starting');
  });
});

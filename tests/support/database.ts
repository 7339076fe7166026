import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import postgres from 'postgres';
import { connect, type Database } from '$lib/server/db/client';
import { migrateDatabase } from '../../scripts/migrate';

const ROOT = dirname(dirname(dirname(fileURLToPath(import.meta.url))));
/** Of test databases only, on a server that is thrown away. */
const APP_PASSWORD = 'wharfinger-test';

export interface TestDatabase {
  /** The owner of its tables, who could switch triggers off. */
  readonly ownerUrl: string;
  readonly appUrl: string;
  /** As the application's role. */
  readonly db: Database;
  readonly ownerSql: postgres.Sql;
  close(): Promise<void>;
}

function serverUrl(database: string, login?: { role: string; password: string }): string {
  const given = process.env.TEST_DATABASE_OWNER_URL;
  if (!given)
    throw new Error('TEST_DATABASE_OWNER_URL is not set; npm test makes a throw-away server and sets it');
  const url = new URL(given);
  url.pathname = `/${database}`;
  if (login) [url.username, url.password] = [login.role, login.password];
  return url.href;
}

/** Name of the migrated database that the others are copied from: another one for other migrations. */
function templateName(): string {
  const hash = createHash('sha256');
  const folder = join(ROOT, 'drizzle');
  for (const name of readdirSync(folder)
    .filter((file) => file.endsWith('.sql'))
    .sort())
    hash.update(name).update(readFileSync(join(folder, name)));
  hash.update(readFileSync(join(ROOT, 'scripts', 'migrate.ts')));
  return `wharfinger_template_${hash.digest('hex').slice(0, 12)}`;
}

/** Makes the template once per server, whoever comes first. */
async function ensureTemplate(admin: postgres.Sql, name: string): Promise<void> {
  await admin`select pg_advisory_lock(hashtext('wharfinger test template'))`;
  try {
    const [known] = await admin`select 1 from pg_database where datname = ${name}`;
    if (known) return;
    const making = `${name}_making`;
    await admin.unsafe(`drop database if exists ${making} with (force)`);
    await admin.unsafe(`create database ${making}`);
    await migrateDatabase(serverUrl(making), APP_PASSWORD);
    await admin.unsafe(`alter database ${making} rename to ${name}`);
  } finally {
    await admin`select pg_advisory_unlock(hashtext('wharfinger test template'))`;
  }
}

/** A fresh, migrated, empty database of its own; `close` drops it. */
export async function testDatabase(): Promise<TestDatabase> {
  const admin = postgres(serverUrl('postgres'), { max: 1, onnotice: () => {} });
  const template = templateName();
  const name = `wharfinger_test_${crypto.randomUUID().replaceAll('-', '').slice(0, 16)}`;
  try {
    await ensureTemplate(admin, template);
    await admin.unsafe(`create database ${name} template ${template}`);
    await admin.unsafe(`grant connect on database ${name} to wharfinger_app`);
  } finally {
    await admin.end();
  }
  const ownerUrl = serverUrl(name);
  const appUrl = serverUrl(name, { role: 'wharfinger_app', password: APP_PASSWORD });
  const app = connect(appUrl, { max: 60 });
  const ownerSql = postgres(ownerUrl, { max: 2, onnotice: () => {}, connection: { TimeZone: 'UTC' } });
  const close = async () => {
    await Promise.all([app.close(), ownerSql.end()]);
    const dropper = postgres(serverUrl('postgres'), { max: 1, onnotice: () => {} });
    await dropper.unsafe(`drop database if exists ${name} with (force)`);
    await dropper.end();
  };
  return { ownerUrl, appUrl, db: app.db, ownerSql, close };
}

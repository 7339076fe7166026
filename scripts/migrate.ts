/**
 * Brings a database up to date, as the role that owns its tables: DATABASE_OWNER_URL. The application's role is
 * made by the migrations and gets its password here: APP_ROLE_PASSWORD. Running it twice changes nothing; two at
 * once wait for one another.
 */
import { dirname, join } from 'node:path';
import { fileURLToPath, pathToFileURL } from 'node:url';
import { drizzle } from 'drizzle-orm/postgres-js';
import { migrate } from 'drizzle-orm/postgres-js/migrator';
import { runMigrations } from 'graphile-worker';
import postgres from 'postgres';

const APP_ROLE = 'wharfinger_app';
/** Any number, the same for everybody who migrates. */
const MIGRATION_LOCK = 7_241_990;
const FOLDER = join(dirname(dirname(fileURLToPath(import.meta.url))), 'drizzle');

/** What the application may do in the job queue's own schema: run its functions and keep its rows. */
const QUEUE_GRANTS = `
  GRANT USAGE ON SCHEMA graphile_worker TO ${APP_ROLE};
  GRANT SELECT, INSERT, UPDATE, DELETE ON ALL TABLES IN SCHEMA graphile_worker TO ${APP_ROLE};
  REVOKE INSERT, UPDATE, DELETE ON graphile_worker.migrations FROM ${APP_ROLE};
  GRANT USAGE, SELECT ON ALL SEQUENCES IN SCHEMA graphile_worker TO ${APP_ROLE};
  GRANT EXECUTE ON ALL FUNCTIONS IN SCHEMA graphile_worker TO ${APP_ROLE};`;

/** Applies all migrations and sets the application role's password; prints nothing. */
export async function migrateDatabase(ownerUrl: string, appPassword: string): Promise<void> {
  const sql = postgres(ownerUrl, { max: 1, onnotice: () => {}, connection: { TimeZone: 'UTC' } });
  try {
    await sql`select pg_advisory_lock(${MIGRATION_LOCK})`;
    await migrate(drizzle(sql, { casing: 'snake_case' }), { migrationsFolder: FOLDER });
    await migrateQueue(sql, ownerUrl);
    await letApplicationIn(sql, appPassword);
  } finally {
    await sql.end({ timeout: 5 });
  }
}

/** The job queue keeps its own schema and its own migrations; its tables have row security, so ours get a policy. */
async function migrateQueue(sql: postgres.Sql, ownerUrl: string): Promise<void> {
  await runMigrations({ connectionString: ownerUrl });
  await sql.unsafe(QUEUE_GRANTS);
  const tables = await sql<{ name: string }[]>`
    select c.relname as name from pg_class c join pg_namespace n on n.oid = c.relnamespace
    where n.nspname = 'graphile_worker' and c.relrowsecurity
      and not exists (select from pg_policy p where p.polrelid = c.oid and p.polname = 'application')`;
  for (const { name } of tables) {
    await sql.unsafe(
      `CREATE POLICY application ON graphile_worker.${quoted(name)} TO ${APP_ROLE} USING (true) WITH CHECK (true)`
    );
  }
}

async function letApplicationIn(sql: postgres.Sql, password: string): Promise<void> {
  if (!/^[\x21-\x7e]{8,200}$/.test(password))
    throw new Error('APP_ROLE_PASSWORD must be 8 to 200 visible ASCII characters');
  const [{ statement }] = await sql<{ statement: string }[]>`
    select format('ALTER ROLE ${sql.unsafe(APP_ROLE)} LOGIN PASSWORD %L', ${password}::text) as statement`;
  await sql.unsafe(statement);
  const [{ name }] = await sql<{ name: string }[]>`select current_database() as name`;
  await sql.unsafe(`GRANT CONNECT ON DATABASE ${quoted(name)} TO ${APP_ROLE}`);
}

const quoted = (name: string) => `"${name.replaceAll('"', '""')}"`;

function setting(name: string): string {
  const value = process.env[name];
  if (!value) throw new Error(`${name} is not set`);
  return value;
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  try {
    await migrateDatabase(setting('DATABASE_OWNER_URL'), setting('APP_ROLE_PASSWORD'));
  } catch (error) {
    const cause = error instanceof Error && error.cause instanceof Error ? ` (${error.cause.message})` : '';
    console.error(
      `The migrations were not applied: ${error instanceof Error ? error.message : error}${cause}`
    );
    process.exitCode = 1;
  }
}

import { drizzle, type PostgresJsDatabase } from 'drizzle-orm/postgres-js';
import postgres from 'postgres';
import * as schema from './schema';

export type Database = PostgresJsDatabase<typeof schema> & { $client: postgres.Sql };
export type Transaction = Parameters<Parameters<PostgresJsDatabase<typeof schema>['transaction']>[0]>[0];
/** What a read accepts: the pool, or a transaction that is already open. */
export type Executor = PostgresJsDatabase<typeof schema> | Transaction;

export interface Connection {
  readonly db: Database;
  close(): Promise<void>;
}

/**
 * Opens a pool. Times are UTC whatever the server's setting; a statement that runs for a minute and a
 * transaction that sits idle for half of one are ended by the server, so that a stuck request neither holds
 * locks for ever nor keeps the trail from being sealed.
 */
export function connect(url: string, options: { max?: number } = {}): Connection {
  const client = postgres(url, {
    max: options.max ?? 20,
    connect_timeout: 5,
    onnotice: () => {},
    connection: {
      application_name: 'wharfinger',
      TimeZone: 'UTC',
      statement_timeout: 60_000,
      idle_in_transaction_session_timeout: 30_000
    }
  });
  return {
    db: drizzle(client, { schema, casing: 'snake_case' }),
    close: () => client.end({ timeout: 5 })
  };
}

let shared: Connection | undefined;

/** The process's own pool, opened at first use from DATABASE_URL. */
export function database(): Database {
  if (!shared) {
    const url = process.env.DATABASE_URL;
    if (!url) throw new Error('DATABASE_URL is not set: the application has no database to speak to');
    shared = connect(url);
  }
  return shared.db;
}

/** Closes the process's own pool, if it was opened. */
export async function closeDatabase(): Promise<void> {
  const open = shared;
  shared = undefined;
  await open?.close();
}

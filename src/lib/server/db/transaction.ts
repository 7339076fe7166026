import type { Executor, Transaction } from './client';

/** PostgreSQL's way of saying "try again": serialization failure, deadlock. */
const TRY_AGAIN = new Set(['40001', '40P01']);
const ATTEMPTS = 4;

/** PostgreSQL's five-character code of an error, looked for through the wrappers around it. */
export function databaseErrorCode(error: unknown): string | undefined {
  for (let at: unknown = error; at instanceof Error; at = at.cause) {
    if ('code' in at && typeof at.code === 'string' && /^[0-9A-Z]{5}$/.test(at.code)) return at.code;
  }
  return undefined;
}

/**
 * Runs the work in one transaction: all of it is kept, or nothing. Where the server could not order it among
 * its neighbours it runs again, up to three times more, so the work must not act outside the database.
 */
export async function transact<T>(db: Executor, work: (tx: Transaction) => Promise<T>): Promise<T> {
  for (let attempt = 1; ; attempt += 1) {
    try {
      return await db.transaction(work);
    } catch (error) {
      if (attempt >= ATTEMPTS || !TRY_AGAIN.has(databaseErrorCode(error) ?? '')) throw error;
    }
  }
}

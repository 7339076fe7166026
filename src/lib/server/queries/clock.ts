import { sql } from 'drizzle-orm';
import type { Executor } from '../db/client';

/** The site's calendar date now, `YYYY-MM-DD`, by the database's clock. */
export async function siteToday(db: Executor, timeZone: string): Promise<string> {
  const [row] = await db.execute<{ today: string }>(
    sql`select to_char(clock_timestamp() at time zone ${timeZone}, 'YYYY-MM-DD') as today`
  );
  return row.today;
}

/** The database's clock now. */
export async function serverNow(db: Executor): Promise<Date> {
  const [row] = await db.execute<{ now: string }>(sql`select clock_timestamp()::text as now`);
  return new Date(row.now);
}

import { sql } from 'drizzle-orm';
import type { Transaction } from '../db/client';
import { numberSeries } from '../db/schema';

/**
 * Next number of a yearly series, e.g. `L-2026-0007`. The row lock makes numbers of one series commit in
 * order; a rolled-back use leaves no gap because the counter rolls back with it.
 */
export async function nextNumber(tx: Transaction, prefix: string): Promise<string> {
  const [{ year }] = await tx.execute<{ year: string }>(
    sql`select to_char(clock_timestamp() at time zone 'UTC', 'YYYY') as year`
  );
  const [{ last }] = await tx
    .insert(numberSeries)
    .values({ series: `${prefix}-${year}`, last: 1 })
    .onConflictDoUpdate({ target: numberSeries.series, set: { last: sql`${numberSeries.last} + 1` } })
    .returning({ last: numberSeries.last });
  return `${prefix}-${year}-${String(last).padStart(4, '0')}`;
}

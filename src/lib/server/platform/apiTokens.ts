import { sql } from 'drizzle-orm';
import type { Executor } from '../db/client';
import type { ActingPerson } from './act';
import { personOf, tokenKey, type PersonRow } from './sessions';

export interface Bearer {
  /** The person who answers for what the token sends. */
  readonly person: ActingPerson;
  /** The only actions the token may do, within its owner's rights. */
  readonly scopes: readonly string[];
}

/** Whom an instrument's token stands for; null where it is unknown, revoked, or its owner is not active. */
export async function readBearer(db: Executor, token: string): Promise<Bearer | null> {
  const [row] = await db.execute<PersonRow & { scopes: string[] }>(sql`
    update api_tokens t set last_used_at = clock_timestamp()
    from users u join sites si on si.id = u.site_id
    where t.token_hash = ${tokenKey(token)} and t.revoked_at is null and u.id = t.owner_id and u.status = 'active'
    returning t.scopes, u.id, u.printed_name, u.user_name, u.site_id, si.time_zone, si.demo,
      (select array_agg(g.role order by g.role) from role_grants g where g.user_id = u.id and g.ended_at is null) as roles`);
  if (!row) return null;
  return { scopes: row.scopes, person: personOf(row) };
}

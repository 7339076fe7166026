import { sql } from 'drizzle-orm';
import type { Executor } from '../db/client';

/** Append-only tables, each with a trigger against changes of rows and one against emptying. */
export const APPEND_ONLY = [
  'trail_entries',
  'trail_leaves',
  'trail_nodes',
  'tree_heads',
  'trail_reviews',
  'scans',
  'decisions',
  'signatures',
  'raw_files',
  'certificates',
  'dispositions',
  'performance_checks',
  'instrument_log',
  'lot_papers',
  'limit_tests',
  'deviation_notes',
  'libraries',
  'tolerance_sets',
  'challenge_spectra',
  'caution_acknowledgements'
] as const;

/** Triggers without which the trail is not one, besides those against change. */
const OTHERS = [
  ['trail_entries', 'write_entry'],
  ['trail_leaves', 'check_leaf'],
  ['signatures', 'stamp'],
  ['dispositions', 'check_disposition'],
  ['lots', 'check_status'],
  ['scans', 'check_scan'],
  ['method_versions', 'check_version'],
  ['method_version_references', 'check_reference'],
  ['reference_spectra', 'check_reference'],
  ['users', 'check_user'],
  ['role_grants', 'check_grant'],
  ['deviations', 'check_deviation'],
  ['repeat_requests', 'check_request'],
  ['password_links', 'check_link'],
  ['role_requests', 'check_request']
] as const;

/**
 * What is missing of the database's own protection, as sentences; empty when all stands. A role that owns the
 * trail, or is a superuser, could take the triggers away, and a trigger that is gone or off protects nothing.
 */
export async function missingWalls(db: Executor): Promise<string[]> {
  const [role] = await db.execute<{ name: string; owner: boolean; superuser: boolean; writes: boolean }>(sql`
    select current_user as name, r.rolsuper as superuser,
      pg_has_role(current_user, c.relowner, 'member') as owner,
      has_table_privilege('trail_entries', 'UPDATE') or has_table_privilege('trail_entries', 'DELETE')
        or has_table_privilege('trail_entries', 'TRUNCATE') as writes
    from pg_roles r, pg_class c where r.rolname = current_user and c.oid = 'trail_entries'::regclass`);
  const faults: string[] = [];
  if (role.superuser) faults.push(`The application signs in to the database as ${role.name}, a superuser.`);
  else if (role.owner)
    faults.push(`The application signs in to the database as ${role.name}, which owns the audit trail.`);
  else if (role.writes)
    faults.push(`The application's role ${role.name} may change or empty the audit trail.`);
  const rows = await db.execute<{ relation: string; name: string; enabled: string }>(sql`
    select c.relname as relation, t.tgname as name, t.tgenabled as enabled
    from pg_trigger t join pg_class c on c.oid = t.tgrelid join pg_namespace n on n.oid = c.relnamespace
    where n.nspname = 'public' and not t.tgisinternal`);
  const standing = new Set(
    rows.filter((row) => row.enabled === 'A').map((row) => `${row.relation}.${row.name}`)
  );
  const wanted = [
    ...APPEND_ONLY.flatMap((table) => [`${table}.append_only`, `${table}.never_emptied`]),
    ...OTHERS.map(([table, name]) => `${table}.${name}`)
  ];
  for (const trigger of wanted)
    if (!standing.has(trigger)) faults.push(`The trigger ${trigger} is missing or switched off.`);
  return faults;
}

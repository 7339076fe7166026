import { ROLE_NAMES, type RoleId } from './roles';

/** Roles that keep the system itself, and roles that read everything, go with none of these. */
const CONFLICTS: Readonly<Partial<Record<RoleId, readonly RoleId[]>>> = {
  administrator: ['operator', 'method_owner', 'approver', 'auditor'],
  auditor: ['operator', 'method_owner', 'approver', 'administrator']
};

const clashes = (one: RoleId, other: RoleId) => CONFLICTS[one]?.includes(other) ?? false;

/**
 * Why a person who holds these roles may not hold another besides, or null. An administrator has no part in the
 * plant's work (PIC/S PI 041-1, 9.5), and an auditor only reads. Of the others a person may hold several: that
 * nobody decides their own work is a rule of each record.
 */
export function roleConflict(held: readonly RoleId[], wanted: RoleId): string | null {
  const against = held.find((role) => clashes(role, wanted) || clashes(wanted, role));
  if (!against) return null;
  return `${ROLE_NAMES[against]} and ${ROLE_NAMES[wanted]} are never held by the same person.`;
}

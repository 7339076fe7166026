/**
 * Who may do what: the one table that hooks, routes, pages and tests read. An action that is not listed is
 * allowed to nobody. Segregation of duties (nobody approves what they wrote …) is checked on the record,
 * in the command; this table is only the first gate.
 */
export const ROLE_IDS = ['operator', 'method_owner', 'approver', 'auditor', 'administrator'] as const;
export type RoleId = (typeof ROLE_IDS)[number];

export const ROLE_NAMES: Readonly<Record<RoleId, string>> = {
  operator: 'Warehouse QC operator',
  method_owner: 'Method owner',
  approver: 'QA approver',
  auditor: 'Auditor',
  administrator: 'Administrator'
};

const ALL: readonly RoleId[] = ROLE_IDS;
const GMP: readonly RoleId[] = ['operator', 'method_owner', 'approver', 'auditor'];

export const PERMISSIONS = {
  'tally.read': ALL,
  'help.read': ALL,
  'account.own': ALL,
  'delivery.read': GMP,
  'delivery.register': ['operator', 'approver'],
  'label.print': ['operator', 'approver'],
  'paper.attach': ['operator', 'approver'],
  'limit-test.record': ['approver'],
  'lot.read': GMP,
  'lot.release': ['approver'],
  'container.set-aside': ['operator', 'approver'],
  'scan.record': ['operator'],
  'scan.read': GMP,
  'scan.read-rivals': ['method_owner', 'approver', 'auditor'],
  'scan.replay': ['method_owner', 'approver', 'auditor'],
  'repeat.request': ['operator'],
  'repeat.grant': ['approver'],
  'role.grant': ['approver'],
  'review.read': ['approver', 'auditor'],
  'deviation.read': GMP,
  'deviation.open': ['operator', 'method_owner', 'approver'],
  'deviation.work': ['method_owner', 'approver'],
  'deviation.close': ['approver'],
  'certificate.read': GMP,
  'material.read': GMP,
  'material.write': ['method_owner'],
  'reference.read': ['method_owner', 'approver', 'auditor'],
  'reference.write': ['method_owner'],
  'method.read': ['method_owner', 'approver', 'auditor'],
  'method.write': ['method_owner'],
  'method.submit': ['method_owner'],
  'method.approve': ['approver'],
  'method.withdraw': ['approver'],
  'instrument.read': ALL,
  'instrument.check': ['operator', 'method_owner'],
  'instrument.write': ['administrator'],
  'instrument.take-out': ['operator', 'method_owner', 'approver'],
  'trend.read': ['method_owner', 'approver', 'auditor'],
  'trail.read': ['approver', 'auditor', 'administrator'],
  'trail.verify': ['approver', 'auditor', 'administrator'],
  'trail.review': ['approver', 'auditor'],
  'trail.export': ['auditor', 'approver'],
  'record.export': ['auditor', 'approver'],
  'admin.people': ['administrator'],
  'admin.settings': ['administrator'],
  'admin.mail': ['administrator'],
  'admin.jobs': ['administrator']
} as const satisfies Record<string, readonly RoleId[]>;

export type Action = keyof typeof PERMISSIONS;

/** What the checks need to know of a person. */
export interface Actor {
  readonly id: string;
  readonly printedName: string;
  readonly roles: readonly RoleId[];
}

/** Whether the person's roles allow the action. */
export function can(actor: Pick<Actor, 'roles'> | null | undefined, action: Action): boolean {
  if (!actor) return false;
  const allowed: readonly RoleId[] = PERMISSIONS[action];
  return actor.roles.some((role) => allowed.includes(role));
}

/** The role under which a person does the action: the first of theirs that allows it (for the trail). */
export function actingRole(actor: Pick<Actor, 'roles'>, action: Action): RoleId | null {
  const allowed: readonly RoleId[] = PERMISSIONS[action];
  return actor.roles.find((role) => allowed.includes(role)) ?? null;
}

/** The names of the roles that may do the action, for a refused page: "QA approver or Auditor". */
export function rolesFor(action: Action): string {
  const names = PERMISSIONS[action].map((role) => ROLE_NAMES[role]);
  if (names.length === 1) return names[0];
  return `${names.slice(0, -1).join(', ')} or ${names[names.length - 1]}`;
}

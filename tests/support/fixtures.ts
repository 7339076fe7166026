import { ROLE_IDS, type RoleId } from '$lib/domain/roles';
import type { Database } from '$lib/server/db/client';
import { roleGrants, sites, users } from '$lib/server/db/schema';
import type { Act } from '$lib/server/platform/act';
import { hashPassword } from '$lib/server/platform/password';
import { openSession, tokenKey } from '$lib/server/platform/sessions';

export const PASSWORD = 'a lantern over grey water';

let passwordHash: Promise<string> | undefined;
/** The password's hash, made once and at low cost: tests sign in often. */
export const cheapHash = () => (passwordHash ??= hashPassword(PASSWORD, { memoryKib: 64, passes: 1 }));

export interface Person {
  readonly id: string;
  readonly act: Act;
  /** The session's token, as the cookie would hold it. */
  readonly token: string;
}

export interface Fixtures {
  readonly siteId: string;
  /** One person for each role, with an open session. */
  readonly people: Readonly<Record<RoleId, Person>>;
  /** Another person, with these roles. */
  addPerson(
    userName: string,
    roles: readonly RoleId[],
    more?: Partial<typeof users.$inferInsert>
  ): Promise<Person>;
}

/** A site with one person per role, whose password is PASSWORD. */
export async function makeFixtures(db: Database): Promise<Fixtures> {
  const timeZone = 'Europe/Lisbon';
  const [site] = await db
    .insert(sites)
    .values({ code: 'HW', name: 'Harbour Works', dock: 'B', timeZone })
    .returning({ id: sites.id });

  const addPerson: Fixtures['addPerson'] = async (userName, roles, more = {}) => {
    const printedName = more.printedName ?? `Person ${userName}`;
    const [row] = await db
      .insert(users)
      .values({
        siteId: site.id,
        userName,
        personId: `P-${userName}`,
        printedName,
        email: `${userName}@example.test`,
        passwordHash: await cheapHash(),
        proofedAt: new Date('2026-01-05T08:00:00Z'),
        proofedBy: 'Personnel office',
        statementAcceptedAt: new Date('2026-01-05T08:30:00Z'),
        ...more
      })
      .returning({ id: users.id });
    if (roles.length > 0)
      await db
        .insert(roleGrants)
        .values(roles.map((role) => ({ userId: row.id, role, reason: 'for a test' })));
    const token = await openSession(db, row.id, {});
    const actor = { id: row.id, userName, printedName, roles, siteId: site.id, timeZone, demo: false };
    return {
      id: row.id,
      token,
      act: { actor, requestId: `request of ${userName}`, sessionKey: tokenKey(token) }
    };
  };

  const people = {} as Record<RoleId, Person>;
  for (const role of ROLE_IDS) people[role] = await addPerson(role, [role]);
  return { siteId: site.id, people, addPerson };
}

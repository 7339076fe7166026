import { roleGrants, users } from '../../src/lib/server/db/schema';
import type { Database } from '../../src/lib/server/db/client';
import { transact } from '../../src/lib/server/db/transaction';
import { systemAct, type Act } from '../../src/lib/server/platform/act';
import { hashPassword } from '../../src/lib/server/platform/password';
import { recordTrail } from '../../src/lib/server/platform/trail';
import { PEOPLE, SITE } from './scenario';

/** The demo's accounts with their roles; gives who acts as whom. */
export async function makePeople(db: Database, siteId: string): Promise<Record<string, Act>> {
  const acts: Record<string, Act> = {};
  const maker = systemAct('svc:demo-seed', siteId, SITE.timeZone);
  for (const person of PEOPLE) {
    const passwordHash = await hashPassword(person.password);
    acts[person.userName] = await transact(db, async (tx) => {
      const [row] = await tx
        .insert(users)
        .values({
          siteId,
          userName: person.userName,
          personId: person.personId,
          printedName: person.printedName,
          email: `${person.userName}@tern-island.example`,
          passwordHash,
          proofedAt: new Date('2026-01-12T09:00:00Z'),
          proofedBy: 'Personnel office (demo)',
          statementAcceptedAt: new Date('2026-01-12T09:10:00Z')
        })
        .returning({ id: users.id });
      await tx
        .insert(roleGrants)
        .values(person.roles.map((role) => ({ userId: row.id, role, reason: 'Demo account' })));
      await recordTrail(tx, maker, {
        action: 'account.create',
        recordType: 'account',
        recordId: row.id,
        recordLabel: `Account ${person.userName}`,
        after: { userName: person.userName, printedName: person.printedName, roles: [...person.roles] }
      });
      const actor = {
        id: row.id,
        userName: person.userName,
        printedName: person.printedName,
        roles: person.roles,
        siteId,
        timeZone: SITE.timeZone,
        demo: true
      };
      return { actor, requestId: 'demo seed', sessionKey: null };
    });
  }
  return acts;
}

import { and, eq, inArray, isNull } from 'drizzle-orm';
import { PERMISSIONS, type Action } from '../../domain/roles';
import type { Executor, Transaction } from '../db/client';
import { outboxMails, roleGrants, users } from '../db/schema';
import { origin } from './env';

export interface NewMail {
  /** One person, or everybody of a site whose role allows the action. */
  readonly to: { readonly userId: string } | { readonly action: Action; readonly siteId: string };
  /** What the mail is about, for the list of mails, e.g. `account-locked`. */
  readonly kind: string;
  readonly subject: string;
  /** Plain text. */
  readonly body: string;
  /** Path of the page it is about, below the application's address. */
  readonly link?: string;
}

// A line break in a subject would begin another header.
const oneLine = (text: string) =>
  text
    .replaceAll(/[\r\n\t\p{Cc}]+/gu, ' ')
    .trim()
    .slice(0, 200);

/**
 * Puts a mail in the outbox, in the transaction of what it tells of: a change that is rolled back tells nobody,
 * and one that is kept tells even if the mail server is away. Returns how many people it goes to.
 */
export async function queueMail(tx: Transaction, mail: NewMail): Promise<number> {
  const people = await recipients(tx, mail.to);
  if (people.length === 0) return 0;
  const link = mail.link ? `\n\n${new URL(mail.link, origin()).href}` : '';
  await tx.insert(outboxMails).values(
    people.map((person) => ({
      toUserId: person.id,
      toAddress: oneLine(person.email),
      kind: mail.kind,
      subject: oneLine(mail.subject),
      body: `${mail.body}${link}\n`
    }))
  );
  return people.length;
}

function recipients(db: Executor, to: NewMail['to']): Promise<{ id: string; email: string }[]> {
  const columns = { id: users.id, email: users.email };
  if ('userId' in to) return db.select(columns).from(users).where(eq(users.id, to.userId));
  const held = and(
    eq(roleGrants.userId, users.id),
    isNull(roleGrants.endedAt),
    inArray(roleGrants.role, [...PERMISSIONS[to.action]])
  );
  return db
    .selectDistinct(columns)
    .from(users)
    .innerJoin(roleGrants, held)
    .where(and(eq(users.siteId, to.siteId), eq(users.status, 'active')));
}

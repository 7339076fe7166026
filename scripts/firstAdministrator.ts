/**
 * The first two people of an empty database. Roles are granted by two persons (an administrator asks, a QA approver
 * signs), so an installation needs one of each before anybody can be given a role in the ordinary way: the site, an
 * administrator and a QA approver are made here, without passwords, and a link is printed for each with which that
 * person sets their own. Both are named people whose identity the installer has seen; there are no default accounts.
 *
 *     FIRST_ADMINISTRATOR='user name; personnel number; printed name; e-mail'
 *     FIRST_APPROVER='user name; personnel number; printed name; e-mail'
 *     INSTALLED_BY='who installs and has seen the proof of identity of both'
 *     SITE_NAME   name of the plant (Unnamed site)     SITE_TIME_ZONE   IANA zone (UTC)
 *     DATABASE_URL   the application's role            ORIGIN           address that the links begin with
 *
 * `npm start -- --no-demo` runs it after the migrations; `npm run first-administrator` runs it alone. Where a site
 * exists it makes nothing. As long as no administrator has set a password, it prints new links for the two, because
 * nobody else could: a link is good once, for 15 minutes.
 */
import { pathToFileURL } from 'node:url';
import { and, eq, isNotNull, isNull, sql } from 'drizzle-orm';
import { PASSWORD_LINK_MINUTES } from '../src/lib/domain/accounts';
import { newAccountSchema, type NewAccount } from '../src/lib/domain/newAccount';
import { PERMISSIONS, ROLE_NAMES, type RoleId } from '../src/lib/domain/roles';
import { closeDatabase, database, type Database, type Transaction } from '../src/lib/server/db/client';
import { roleGrants, sites, users } from '../src/lib/server/db/schema';
import { transact } from '../src/lib/server/db/transaction';
import { systemAct, type Act } from '../src/lib/server/platform/act';
import { origin } from '../src/lib/server/platform/env';
import { issuePasswordLink, passwordPath } from '../src/lib/server/platform/passwordLinks';
import { recordTrail } from '../src/lib/server/platform/trail';
import { siteToday } from '../src/lib/server/queries/clock';

const FIRST = [
  { variable: 'FIRST_ADMINISTRATOR', role: PERMISSIONS['admin.people'][0] },
  { variable: 'FIRST_APPROVER', role: PERMISSIONS['role.grant'][0] }
] as const;
type Settings = Readonly<Record<string, string | undefined>>;

/** Makes the first two people, or says in plain sentences why not; returns the lines to print. */
export async function makeFirstPeople(db: Database, settings: Settings): Promise<string[]> {
  return transact(db, async (tx) => {
    // Two installers at once: the second waits and finds the site.
    await tx.execute(sql`select pg_advisory_xact_lock(hashtext('wharfinger first people'))`);
    const [site] = await tx.select().from(sites).limit(1);
    return site ? renewLinks(tx) : firstPeople(tx, settings);
  });
}

async function firstPeople(tx: Transaction, settings: Settings): Promise<string[]> {
  const timeZone = settings.SITE_TIME_ZONE || 'UTC';
  if (!isTimeZone(timeZone))
    return [`SITE_TIME_ZONE is ${timeZone}, which is no time zone. Nothing was made.`];
  const today = await siteToday(tx, timeZone);
  const read = FIRST.map(({ variable }) =>
    readPerson(variable, settings[variable], settings.INSTALLED_BY, today)
  );
  const faults = read.flatMap((person) => ('fault' in person ? [person.fault] : []));
  if (faults.length > 0) return [...faults, ...HOW_TO];
  const people = read.flatMap((person) => ('account' in person ? [person.account] : []));
  const [administrator, approver] = people;
  if (
    administrator.personId === approver.personId ||
    administrator.userName.toLowerCase() === approver.userName.toLowerCase()
  )
    return ['The administrator and the QA approver must be two people. Nothing was made.', ...HOW_TO];
  const [site] = await tx
    .insert(sites)
    .values({ code: 'SITE', name: settings.SITE_NAME || 'Unnamed site', dock: '1', timeZone })
    .returning({ id: sites.id, name: sites.name });
  const act = systemAct('svc:first-administrator', site.id, timeZone);
  const lines = [`The site "${site.name}" is made, with two accounts that have no password yet.`];
  for (const [index, account] of people.entries())
    lines.push(await makePerson(tx, act, account, FIRST[index].role));
  return [...lines, lifeOfLinks()];
}

const HOW_TO = [
  'Nobody can sign in yet: an empty database needs its first administrator and its first QA approver, by name. Set',
  "  FIRST_ADMINISTRATOR='user name; personnel number; printed name; e-mail'",
  "  FIRST_APPROVER='user name; personnel number; printed name; e-mail'",
  "  INSTALLED_BY='your name, who has seen the proof of identity of both'",
  'and start again. SITE_NAME and SITE_TIME_ZONE name the plant and its time zone.'
];
const lifeOfLinks = () =>
  `Each link sets a password once, within ${PASSWORD_LINK_MINUTES} minutes. Start again for new ones if they lapse.`;

function isTimeZone(name: string): boolean {
  try {
    return Boolean(new Intl.DateTimeFormat('en', { timeZone: name }));
  } catch {
    return false;
  }
}

type ReadPerson = { readonly account: NewAccount } | { readonly fault: string };

function readPerson(variable: string, value = '', proofedBy = '', proofedOn: string): ReadPerson {
  if (value.trim() === '') return { fault: `${variable} is not set.` };
  if (proofedBy.trim() === '') return { fault: 'INSTALLED_BY is not set.' };
  const [userName, personId, printedName, email] = [...value.split(';'), '', '', ''];
  const parsed = newAccountSchema.safeParse({ userName, personId, printedName, email, proofedBy, proofedOn });
  if (parsed.success) return { account: parsed.data };
  const [issue] = parsed.error.issues;
  return { fault: `${variable}: ${String(issue.path[0])}: ${issue.message}.` };
}

async function makePerson(tx: Transaction, act: Act, account: NewAccount, role: RoleId): Promise<string> {
  const { proofedOn, ...columns } = account;
  const { siteId, timeZone } = act.actor;
  const [{ id }] = await tx
    .insert(users)
    .values({
      ...columns,
      siteId,
      proofedAt: sql`${proofedOn}::date::timestamp at time zone ${timeZone}`
    })
    .returning({ id: users.id });
  await tx.insert(roleGrants).values({ userId: id, role, reason: 'First of the installation' });
  await recordTrail(tx, act, {
    action: 'account.create',
    recordType: 'account',
    recordId: id,
    recordLabel: `Account ${account.userName}`,
    after: { ...account, roles: [role] },
    reason: 'First of the installation'
  });
  return linkLine(tx, { id, ...account }, role);
}

async function linkLine(
  tx: Transaction,
  person: { id: string; printedName: string; userName: string },
  role: RoleId
): Promise<string> {
  const link = new URL(passwordPath(await issuePasswordLink(tx, person.id, null)), origin()).href;
  return `${ROLE_NAMES[role]} ${person.printedName} (${person.userName}) sets the password at ${link}`;
}

/** New links for first people who never used theirs, while no administrator can make any. */
async function renewLinks(tx: Transaction): Promise<string[]> {
  const holders = (role: RoleId, withPassword: boolean) =>
    tx
      .select({
        id: users.id,
        siteId: users.siteId,
        printedName: users.printedName,
        userName: users.userName
      })
      .from(users)
      .innerJoin(roleGrants, and(eq(roleGrants.userId, users.id), isNull(roleGrants.endedAt)))
      .where(
        and(
          eq(roleGrants.role, role),
          eq(users.status, 'active'),
          withPassword ? isNotNull(users.passwordHash) : isNull(users.passwordHash)
        )
      );
  if ((await holders(FIRST[0].role, true)).length > 0) return [];
  const lines: string[] = [];
  for (const { role } of FIRST) {
    for (const person of await holders(role, false)) {
      await recordTrail(tx, systemAct('svc:first-administrator', person.siteId), {
        action: 'account.password-link',
        recordType: 'account',
        recordId: person.id,
        recordLabel: `Account ${person.userName}`
      });
      lines.push(await linkLine(tx, person, role));
    }
  }
  return lines.length > 0 ? ['No administrator has set a password yet.', ...lines, lifeOfLinks()] : [];
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  try {
    for (const line of await makeFirstPeople(database(), process.env)) console.log(line);
  } finally {
    await closeDatabase();
  }
}

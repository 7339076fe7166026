import { afterAll, beforeEach, describe, expect, test } from 'vitest';
import { setPasswordByLink } from '$lib/server/commands/passwords';
import { must } from '../../scripts/demo/must';
import { makeFirstPeople } from '../../scripts/firstAdministrator';
import { testDatabase, type TestDatabase } from '../support/database';

let database: TestDatabase | undefined;
const base = () => {
  if (!database) throw new Error('no database');
  return database;
};
beforeEach(async () => {
  await database?.close();
  database = await testDatabase();
});
afterAll(() => database?.close());

const SETTINGS = {
  FIRST_ADMINISTRATOR: 's.prior; P-1; Sara Prior; sara@example.test',
  FIRST_APPROVER: 'q.rocha; P-2; Quim Rocha; quim@example.test',
  INSTALLED_BY: 'Ines Vale, installation',
  SITE_NAME: 'Lower Quay',
  SITE_TIME_ZONE: 'Europe/Lisbon'
};
const tokensOf = (lines: readonly string[]) =>
  lines.flatMap((line) => /\/password\/([\w-]{43})$/.exec(line)?.[1] ?? []);
const set = (token: string) => {
  const password = 'seven herons stand at low tide';
  return setPasswordByLink(base().db, { token, password, again: password, accepted: true }, 'a request');
};
const peopleMade = async () =>
  [
    ...(await base()
      .ownerSql`select u.user_name, g.role, u.password_hash, u.proofed_by, s.name, s.time_zone from users u
      join role_grants g on g.user_id = u.id join sites s on s.id = u.site_id order by 1`)
  ].map((row) => ({ ...row }));

describe('R-001, R-005: the first two people of an empty database', () => {
  test('are named, one administrator and one QA approver, without passwords, each with a link', async () => {
    const lines = await makeFirstPeople(base().db, SETTINGS);
    const shared = {
      password_hash: null,
      proofed_by: 'Ines Vale, installation',
      name: 'Lower Quay',
      time_zone: 'Europe/Lisbon'
    };
    expect(await peopleMade()).toEqual([
      { user_name: 'q.rocha', role: 'approver', ...shared },
      { user_name: 's.prior', role: 'administrator', ...shared }
    ]);
    const tokens = tokensOf(lines);
    expect(tokens).toHaveLength(2);
    for (const token of tokens) must(await set(token));
    const [{ n }] = await base()
      .ownerSql`select count(*)::int as n from trail_entries where action = 'account.create' and actor_name = 'svc:first-administrator'`;
    expect(n).toBe(2);
  });

  test('once there, nothing more is made, even by two at once', async () => {
    await Promise.all([makeFirstPeople(base().db, SETTINGS), makeFirstPeople(base().db, SETTINGS)]);
    expect(await peopleMade()).toHaveLength(2);
  });

  test('lapsed links are renewed until the administrator has a password, and then never again', async () => {
    const first = tokensOf(await makeFirstPeople(base().db, SETTINGS));
    const [administrator] = tokensOf(await makeFirstPeople(base().db, {}));
    expect(await set(first[0])).toMatchObject({ ok: false, code: 'link-spent' });
    must(await set(administrator));
    expect(await makeFirstPeople(base().db, SETTINGS)).toEqual([]);
  });

  test.each([
    ['nobody is named', {}, 'FIRST_ADMINISTRATOR is not set.'],
    ['nobody saw the proof', { ...SETTINGS, INSTALLED_BY: '' }, 'INSTALLED_BY is not set.'],
    [
      'a name is of nobody',
      { ...SETTINGS, FIRST_ADMINISTRATOR: 'admin; P-1; Sara Prior; s@example.test' },
      'not one person'
    ],
    ['a part is missing', { ...SETTINGS, FIRST_APPROVER: 'q.rocha; P-2' }, 'FIRST_APPROVER: printedName'],
    [
      'both are one person',
      { ...SETTINGS, FIRST_APPROVER: 'q.rocha; P-1; Quim Rocha; q@example.test' },
      'must be two people'
    ],
    ['the time zone is none', { ...SETTINGS, SITE_TIME_ZONE: 'Atlantis/Dock' }, 'no time zone']
  ])('where %s nothing is made, and a sentence says what to do', async (_, settings, sentence) => {
    expect((await makeFirstPeople(base().db, settings)).join('\n')).toContain(sentence);
    const [{ n }] = await base()
      .ownerSql`select (select count(*) from sites) + (select count(*) from users) as n`;
    expect(Number(n)).toBe(0);
  });
});

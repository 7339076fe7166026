import { expect, test } from '@playwright/test';
import { freePort, startApplication, type RunningApplication } from '../support/application';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD } from '../support/fixtures';
import { choose, enter, expectNoBarrier, signIn, signOut, tabTo, type, typeDate } from './keyboard';

let database: TestDatabase;
let app: RunningApplication;

const port = await freePort();
test.use({ baseURL: `http://127.0.0.1:${port}` });

test.beforeAll(async () => {
  test.setTimeout(120_000);
  database = await testDatabase();
  await makeFixtures(database.db);
  app = await startApplication(database.appUrl, { port });
});
test.afterAll(async () => {
  await app?.stop();
  await database?.close();
});

const NEW_PASSWORD = 'seven herons stand at low tide';

test('R-001, R-005, R-009: from a new account to work in its role, by keyboard alone', async ({ page }) => {
  test.setTimeout(180_000);

  // The administrator makes the account.
  await signIn(page, 'administrator', PASSWORD);
  await enter(page, page.getByRole('link', { name: /^Office/ }));
  await expectNoBarrier(page);
  await enter(page, page.getByRole('link', { name: 'Make an account' }));
  await expectNoBarrier(page);
  await type(page, page.getByLabel('Name as printed with signatures'), 'Nuno Ferreira');
  await type(page, page.getByLabel('Personnel number'), 'P-operator');
  await type(page, page.getByLabel('User name'), 'operator2');
  await type(page, page.getByLabel('E-mail address'), 'nuno@example.test');
  await type(page, page.getByLabel('Proof of identity seen by'), 'Rita Couto');
  await typeDate(page, page.getByRole('group', { name: 'Proof of identity seen on' }), ['5', '1', '2026']);
  await enter(page, page.getByRole('button', { name: 'Make the account' }));
  await expect(page.getByRole('alert')).toContainText('This names a function, not one person');
  await expect(page.getByLabel('Name as printed with signatures')).toHaveValue('Nuno Ferreira');
  await expectNoBarrier(page);
  await type(page, page.getByLabel('User name'), 'n.ferreira');
  await enter(page, page.getByRole('button', { name: 'Make the account' }));
  await expect(page.getByRole('alert')).toContainText('The person of this number has the account operator');
  await type(page, page.getByLabel('Personnel number'), 'N-1');
  await enter(page, page.getByRole('button', { name: 'Make the account' }));
  await expect(page.getByText('The account is made')).toBeVisible();
  await expectNoBarrier(page);
  const link = await page.locator('[data-password-link]').getAttribute('href');
  await enter(page, page.getByRole('link', { name: 'Ask for a role for Nuno Ferreira' }));
  await expectNoBarrier(page);
  await choose(page, page.getByLabel('Role to ask for'), 'Warehouse');
  await type(page, page.getByLabel('Why the person needs it'), 'Joins the dock team');
  await enter(page, page.getByRole('button', { name: 'Ask for the role' }));
  await expect(page.getByText('The request waits for a QA approver.')).toBeVisible();
  await expectNoBarrier(page);
  await signOut(page);

  // The person sets the password.
  await page.goto(String(link));
  await expectNoBarrier(page);
  await type(page, page.getByLabel('New password', { exact: true }), 'nuno ferreira');
  await enter(page, page.getByRole('button', { name: 'Set the password' }));
  await expect(page.getByRole('alert')).toContainText('Use at least 15 characters');
  await expectNoBarrier(page);
  await type(page, page.getByLabel('New password', { exact: true }), NEW_PASSWORD);
  await type(page, page.getByLabel('New password again'), NEW_PASSWORD);
  await tabTo(page, page.getByRole('checkbox'));
  await page.keyboard.press('Space');
  await enter(page, page.getByRole('button', { name: 'Set the password' }));
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('Your password is set');
  await expectNoBarrier(page);
  expect((await page.goto(String(link)))?.status()).toBe(410);
  await expect(page.getByText('Ask an administrator for a new link')).toBeVisible();
  await expectNoBarrier(page);

  // A QA approver signs for the role.
  await signIn(page, 'approver', PASSWORD);
  await enter(page, page.getByRole('link', { name: 'Warehouse QC operator for Nuno Ferreira' }));
  await expectNoBarrier(page);
  await enter(page, page.getByRole('button', { name: 'Grant to Nuno Ferreira' }));
  await expectNoBarrier(page);
  const dialog = page.getByRole('dialog');
  await type(page, dialog.getByLabel('Reason'), 'Trained');
  await type(page, dialog.getByLabel('Your password'), PASSWORD);
  await enter(page, dialog.getByRole('button', { name: 'Sign and grant' }));
  await expect(page.getByText('The role is granted')).toBeVisible();
  await expectNoBarrier(page);
  await signOut(page);

  // The person works in the role, and looks after the own account.
  await signIn(page, 'n.ferreira', NEW_PASSWORD);
  await expect(page.getByRole('link', { name: /^Scan bay/ })).toBeVisible();
  await enter(page, page.getByRole('link', { name: 'Nuno Ferreira' }));
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('Your account');
  await expectNoBarrier(page);
  await type(page, page.getByLabel('Your password now'), NEW_PASSWORD);
  await type(page, page.getByLabel('New password', { exact: true }), 'eight gulls over the customs house');
  await type(page, page.getByLabel('New password again'), 'eight gulls over the customs house');
  await enter(page, page.getByRole('button', { name: 'Change the password' }));
  await expect(page.getByText('Your password is changed')).toBeVisible();
  await expectNoBarrier(page);
  await enter(page, page.getByRole('button', { name: 'End this session' }));
  await page.waitForURL(/\/signin/);
});

test('R-006: an administrator ends a role and suspends an account, by keyboard alone', async ({ page }) => {
  await signIn(page, 'administrator', PASSWORD);
  await page.goto('/admin');
  await enter(page, page.getByRole('link', { name: 'Person method_owner' }));
  await choose(page, page.getByLabel('Role to end'), 'Method owner');
  await type(page, page.getByLabel('Why it ends'), 'Moves to another plant');
  await enter(page, page.getByRole('button', { name: 'End the role' }));
  await expect(page.getByText('The role has ended.')).toBeVisible();
  await expect(page.getByRole('cell', { name: /Moves to another plant/ })).toBeVisible();
  await choose(page, page.getByLabel('New state', { exact: true }), 'Suspended');
  await enter(page, page.getByRole('button', { name: 'Change the state' }));
  await expect(page.getByRole('alert')).toContainText('Say why in a few words');
  await expectNoBarrier(page);
  await type(page, page.getByLabel('Reason for the new state'), 'Moves to another plant');
  await enter(page, page.getByRole('button', { name: 'Change the state' }));
  await expect(page.getByRole('heading', { level: 1 })).toContainText('Suspended');
  await expectNoBarrier(page);
});

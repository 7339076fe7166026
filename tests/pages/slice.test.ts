import { expect, test } from '@playwright/test';
import { freePort, startApplication, type RunningApplication } from '../support/application';
import { testDatabase, type TestDatabase } from '../support/database';
import { makeFixtures, PASSWORD } from '../support/fixtures';
import { makeTestPlant, spectrumFile, type TestPlant } from '../support/plant';
import {
  choose,
  chooseFile,
  enter,
  expectNoBarrier,
  signIn,
  signOut,
  tabTo,
  type,
  typeDate
} from './keyboard';

let database: TestDatabase;
let plant: TestPlant;
let app: RunningApplication;

const port = await freePort();
test.use({ baseURL: `http://127.0.0.1:${port}` });

test.beforeAll(async () => {
  test.setTimeout(120_000);
  database = await testDatabase();
  const fixtures = await makeFixtures(database.db);
  plant = await makeTestPlant(database.db, fixtures);
  await plant.addDemoMaterial('LAC-M');
  await plant.addDemoMaterial('GLU-M');
  app = await startApplication(database.appUrl, { port });
});
test.afterAll(async () => {
  await app?.stop();
  await database?.close();
});

const fileOf = (itemCode: string, seed: string) => {
  const { fileName, bytes } = spectrumFile(itemCode, seed);
  return { name: fileName, mimeType: 'text/csv', buffer: Buffer.from(bytes) };
};
const paper = {
  name: 'coa.pdf',
  mimeType: 'application/pdf',
  buffer: Buffer.from('%PDF-1.4\n% a certificate of analysis\n')
};
const CONTAINERS = 3;

test('one lot, from the truck to a signed certificate, by keyboard alone', async ({ page }) => {
  test.setTimeout(180_000);
  await page.goto('/signin');
  await expectNoBarrier(page);
  await signIn(page, 'operator', PASSWORD);
  await expectNoBarrier(page);

  // Intake.
  await enter(page, page.getByRole('link', { name: /^Deliveries/ }));
  await enter(page, page.getByRole('link', { name: 'Register a delivery' }));
  await type(page, page.getByLabel('Delivery note number'), 'KB-1');
  await choose(page, page.getByLabel('Supplier'), 'Skerry Fine Substances');
  await typeDate(page, page.getByRole('group', { name: 'Arrived on' }), ['5', '1', '2026']);
  await choose(page, page.getByLabel('Material'), 'Lactose monohydrate');
  await choose(page, page.getByLabel('Manufacturer', { exact: true }), 'Saltmarsh Sugars');
  await type(page, page.getByLabel("Manufacturer's batch"), 'SM-1');
  await type(page, page.getByLabel('Number of containers'), '0');
  await typeDate(page, page.getByRole('group', { name: 'Expires on' }), ['31', '3', '2099']);
  await enter(page, page.getByRole('button', { name: 'Register delivery' }));
  // A mistake keeps what was typed and leads to the field.
  await expect(page.getByRole('alert')).toContainText('A lot has at least 1 container');
  await expect(page.getByLabel('Delivery note number')).toHaveValue('KB-1');
  await expectNoBarrier(page);
  await type(page, page.getByLabel('Number of containers'), String(CONTAINERS));
  await enter(page, page.getByRole('button', { name: 'Register delivery' }));
  await expect(page.getByRole('heading', { level: 1 })).toContainText('Delivery D-');
  await expectNoBarrier(page);

  // The certificate of analysis.
  await enter(page, page.getByRole('main').getByRole('link', { name: /^L-/ }));
  await chooseFile(page, page.getByLabel('File', { exact: true }), paper);
  await enter(page, page.getByRole('button', { name: 'Attach paper' }));
  await expect(page.getByRole('link', { name: 'coa.pdf' })).toBeVisible();
  await expectNoBarrier(page);

  // Every drum.
  await enter(page, page.getByRole('link', { name: 'Scan this lot' }));
  await expectNoBarrier(page);
  const rows =
    await database.ownerSql`select c.barcode from containers c join lots l on l.id = c.lot_id where l.manufacturer_batch = 'SM-1' order by c.number`;
  const codes = rows.map((row) => String(row.barcode));
  expect(codes).toHaveLength(CONTAINERS);
  for (const [index, code] of codes.entries()) {
    await type(page, page.getByLabel("1. Scan or type the container's code"), code);
    await page.keyboard.press('Enter');
    await chooseFile(
      page,
      page.getByLabel('2. Choose the spectrum file of this container'),
      fileOf('LAC-M', `keyboard drum ${index}`)
    );
    await expect(page.locator('[data-verdict="pass"]')).toBeVisible();
    if (index === 0) await expectNoBarrier(page);
    // The next step has the focus: one key goes on.
    await expect(page.getByRole('button', { name: 'Next container' })).toBeFocused();
    await page.keyboard.press('Enter');
  }
  await expect(page.getByText(`${CONTAINERS} of ${CONTAINERS} passed`)).toBeVisible();
  await signOut(page);

  // Release by another person.
  await signIn(page, 'approver', PASSWORD);
  await enter(page, page.getByRole('link', { name: /^Review/ }));
  await expectNoBarrier(page);
  await enter(page, page.getByRole('main').getByRole('link', { name: /^L-/ }).first());
  await enter(page, page.getByRole('button', { name: 'Release lot' }));
  await expectNoBarrier(page);
  const dialog = page.getByRole('dialog');
  await type(page, dialog.getByLabel('Reason'), 'All drums passed');
  await type(page, dialog.getByLabel('Your password'), 'not the password at all');
  await enter(page, dialog.getByRole('button', { name: 'Sign and release' }));
  await expect(dialog.getByRole('alert')).toBeVisible();
  await type(page, dialog.getByLabel('Your password'), PASSWORD);
  await enter(page, dialog.getByRole('button', { name: 'Sign and release' }));
  await expect(page.getByText('The certificate is issued')).toBeVisible();
  await expectNoBarrier(page);

  // The certificate is a PDF, and genuine.
  const href = await page.getByRole('link', { name: 'open the PDF' }).getAttribute('href');
  const pdf = await page.request.get(href as string);
  expect(pdf.headers()['content-type']).toBe('application/pdf');
  expect((await pdf.body()).subarray(0, 5).toString()).toBe('%PDF-');
  await enter(page, page.getByRole('link', { name: /^Certificates/ }));
  await expectNoBarrier(page);
  await enter(page, page.getByRole('main').locator('a[href^="/verify/"]'));
  await expect(page.getByText('Genuine', { exact: true })).toBeVisible();
  await expectNoBarrier(page);
  await page.goto('/');
  await signOut(page);

  // The auditor sees every step, sealed.
  await signIn(page, 'auditor', PASSWORD);
  await enter(page, page.getByRole('link', { name: /^Audit trail/ }));
  const main = page.getByRole('main');
  for (const record of [
    'Delivery D-',
    'Lot L-',
    'Scan 1 of container 3',
    'Certificate C-',
    'Signature of Person approver'
  ]) {
    await expect(main.getByText(record).first()).toBeVisible();
  }
  await enter(page, page.getByRole('button', { name: 'Verify the whole trail' }));
  await expect(page.getByText('The trail is whole')).toBeVisible();
  await expectNoBarrier(page);
});

test('a wrong material fails; the operator is told of no rival, QA is', async ({ page }) => {
  const [material] = await database.ownerSql`select id from materials where item_code = 'LAC-M'`;
  const lot = await plant.registerLot(String(material.id), 1);
  await signIn(page, 'operator', PASSWORD);
  await page.goto(`/bay/${lot.lotId}`);
  await type(page, page.getByLabel("1. Scan or type the container's code"), lot.barcodes[0]);
  await page.keyboard.press('Enter');
  await chooseFile(
    page,
    page.getByLabel('2. Choose the spectrum file of this container'),
    fileOf('GLU-M', 'look-alike')
  );
  await expect(page.locator('[data-verdict="fail"]')).toBeVisible();
  await expectNoBarrier(page);
  await tabTo(page, page.locator('summary', { hasText: 'Details' }));
  await page.keyboard.press('Enter');
  await expect(page.getByRole('main')).not.toContainText('Glucose');
  await enter(page, page.getByRole('link', { name: 'Open the evidence of this scan' }));
  await expect(page.getByRole('heading', { name: 'Explanation' })).toBeVisible();
  await expect(page.getByRole('main')).not.toContainText('Glucose');
  await expectNoBarrier(page);
  const address = page.url();
  await signOut(page);
  await signIn(page, 'approver', PASSWORD);
  await page.goto(address);
  await expect(page.getByRole('main')).toContainText('Glucose monohydrate');
  await enter(page, page.getByRole('button', { name: 'Decide again from the record' }));
  await expect(page.getByText('Identical to the last bit')).toBeVisible();
  await expectNoBarrier(page);
});

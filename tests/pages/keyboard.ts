import { AxeBuilder } from '@axe-core/playwright';
import { expect, type Locator, type Page } from '@playwright/test';

/** Most Tab presses to reach anything on a page. */
const MOST_TABS = 160;

/** Moves the focus to an element with the Tab key alone. */
export async function tabTo(page: Page, target: Locator): Promise<void> {
  await expect(target).toBeVisible();
  for (let presses = 0; presses < MOST_TABS; presses++) {
    if (await target.evaluate((element) => element === document.activeElement)) return;
    await page.keyboard.press('Tab');
  }
  throw new Error(`the Tab key does not reach ${target}`);
}

/** Reaches an element by keyboard and presses Enter on it. */
export async function enter(page: Page, target: Locator): Promise<void> {
  await tabTo(page, target);
  await page.keyboard.press('Enter');
}

/** Reaches a field by keyboard and types into it, over whatever stood there. */
export async function type(page: Page, target: Locator, text: string): Promise<void> {
  await tabTo(page, target);
  await page.keyboard.press('Control+a');
  await page.keyboard.type(text);
}

/** Chooses from a list by typing the beginning of the option. */
export async function choose(page: Page, target: Locator, option: string): Promise<void> {
  await tabTo(page, target);
  await page.keyboard.type(option);
  await expect(target.locator('option:checked')).toContainText(option);
}

/** Types a date into its three fields. */
export async function typeDate(
  page: Page,
  group: Locator,
  [day, month, year]: [string, string, string]
): Promise<void> {
  await type(page, group.getByLabel('Day'), day);
  await type(page, group.getByLabel('Month'), month);
  await type(page, group.getByLabel('Year'), year);
}

/** Opens the file chooser of a field by keyboard and gives it a file. */
export async function chooseFile(
  page: Page,
  target: Locator,
  file: { name: string; mimeType: string; buffer: Buffer }
): Promise<void> {
  await tabTo(page, target);
  const [chooser] = await Promise.all([page.waitForEvent('filechooser'), page.keyboard.press('Enter')]);
  await chooser.setFiles(file);
}

/** Nothing that axe can find against WCAG 2.2 AA on the page as it stands. */
export async function expectNoBarrier(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'])
    .analyze();
  expect(
    violations.map(({ id, nodes }) => `${id}: ${nodes.map((node) => node.target.join(' ')).join('; ')}`)
  ).toEqual([]);
}

export async function signIn(page: Page, userName: string, password: string): Promise<void> {
  await page.goto('/signin');
  await type(page, page.getByLabel('User name'), userName);
  await type(page, page.getByLabel('Password'), password);
  await page.keyboard.press('Enter');
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('Tally');
}

export async function signOut(page: Page): Promise<void> {
  await enter(page, page.getByRole('button', { name: 'Sign out' }));
  await page.waitForURL(/\/signin/);
}

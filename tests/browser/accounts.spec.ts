import { randomUUID } from 'node:crypto';
import AxeBuilder from '@axe-core/playwright';
import { expect, test, type Page } from 'playwright/test';
import { demoAccounts } from '../../scripts/demo/accounts.mjs';
import { signInAs } from './people';

const password = 'heron ember lagoon';
const newPassword = 'quartz reed saffron';

/** Follows the link in the kept mail with this subject to this address. */
async function followMail(page: Page, email: string, subject: RegExp) {
  const mail = page
    .getByRole('article')
    .filter({ hasText: `To ${email}` })
    .filter({ has: page.getByRole('heading', { name: subject }) });
  // The mail of a reset is sent after the answer.
  await expect(async () => {
    await page.goto('/mail');
    await expect(mail).toBeVisible({ timeout: 1000 });
  }).toPass();
  await mail.getByRole('link').click();
}

async function signOut(page: Page) {
  await page.locator('header summary').click();
  await page.getByRole('button', { name: 'Sign out' }).click();
  await page.waitForURL('**/sign-in');
}

async function signIn(page: Page, email: string, secret: string) {
  await page.getByLabel('Mail address').fill(email);
  await page.getByLabel('Password', { exact: true }).fill(secret);
  await page.getByRole('button', { name: 'Sign in' }).click();
}

test('the signed-out are led to sign in, and then to the page they wanted', async ({ page }) => {
  await page.goto('/team?before=9');
  await expect(page.getByRole('heading', { name: 'Sign in' })).toBeVisible();
  await expect(page.getByText('no basis for a diagnosis').first()).toBeVisible();
  await signIn(page, demoAccounts[3]!.email, 'not the password');
  await expect(page.getByRole('alert')).toContainText('Mail address or password is wrong.');
  await expect(page.getByLabel('Mail address')).toHaveValue(demoAccounts[3]!.email);
  await page.getByRole('button', { name: /^Fill in the account of .*viewer/ }).click();
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL('**/team?before=9');
  await expect(page.getByRole('button', { name: /^Remove/ })).toHaveCount(0);
});

test('a person is invited, joins, resets a forgotten password, and is removed', async ({
  page,
}) => {
  const email = `${randomUUID()}@example.org`;
  await signInAs(page, 'lead');
  await page.goto('/team');
  await page.getByLabel('Mail address').fill(email);
  await page.getByLabel('Role', { exact: true }).selectOption('researcher');
  await page.getByRole('button', { name: 'Send the invitation' }).click();
  await expect(page.getByRole('status').filter({ hasText: email })).toBeVisible();
  await expect(page.getByRole('region', { name: 'Open invitations' })).toContainText(email);
  await signOut(page);

  await followMail(page, email, /invites you/);
  await expect(page.getByRole('heading', { name: /^Join / })).toBeVisible();
  await page.getByLabel('Your name').fill('Nia Newcome');
  await page.getByLabel('Password', { exact: true }).fill('nianewcome2024');
  await page.getByRole('button', { name: 'Make the account and join' }).click();
  await expect(page.getByText('made from your name or mail address')).toBeVisible();
  await expect(page.getByLabel('Your name')).toHaveValue('Nia Newcome');
  await page.getByLabel('Password', { exact: true }).fill(password);
  await page.getByRole('button', { name: 'Make the account and join' }).click();
  await page.waitForURL('**/studies');
  await expect(page.locator('header summary')).toHaveText('Nia Newcome, researcher');
  await signOut(page);

  await page.getByRole('link', { name: 'Forgot the password?' }).click();
  await expect(page.getByRole('heading', { name: 'Reset the password' })).toBeVisible();
  await page.getByLabel('Mail address').fill(email);
  await page.getByRole('button', { name: 'Send the link' }).click();
  await expect(page.getByRole('status').filter({ hasText: 'Asked for' })).toBeVisible();
  await followMail(page, email, /new password/);
  await page.getByLabel('New password').fill(newPassword);
  await page.getByRole('button', { name: 'Set the password' }).click();
  await page.waitForURL('**/sign-in?reset');
  await signIn(page, email, password);
  await expect(page.getByRole('alert')).toBeVisible();
  await signIn(page, email, newPassword);
  await page.waitForURL('**/studies');
  await signOut(page);

  await signInAs(page, 'lead');
  await page.goto('/team');
  const members = page.getByRole('region', { name: 'Members' });
  const row = members.getByRole('row').filter({ hasText: email });
  await row.getByRole('combobox').selectOption('viewer');
  await row.getByRole('button', { name: 'Change the role' }).click();
  await expect(page.getByText('The role is changed to viewer.')).toBeVisible();
  await row.getByRole('button', { name: 'Remove' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Keep' }).click();
  await expect(row).toHaveCount(1);
  await row.getByRole('button', { name: 'Remove' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Remove' }).click();
  await expect(row).toHaveCount(0);
  await expect(page.getByRole('region', { name: 'Record of actions' })).toContainText(
    'Member removed',
  );
});

test('signing in and out works without JavaScript', async ({ browser, baseURL }) => {
  const context = await browser.newContext({ javaScriptEnabled: false, baseURL: baseURL! });
  const page = await context.newPage();
  await signInAs(page, 'viewer');
  await signOut(page);
  await page.goto('/studies');
  await expect(page).toHaveURL(/\/sign-in\?next=%2Fstudies$/);
  await context.close();
});

test('the chosen theme is in the page the server sends', async ({ page }) => {
  await page.goto('/sign-in');
  await page.getByRole('button', { name: 'dark' }).click();
  await expect(page.locator('html')).toHaveAttribute('data-theme', 'dark');
  await expect(async () => {
    expect(await (await page.request.get('/sign-in')).text()).toContain('data-theme="dark"');
  }).toPass();
});

test('pages and worker scripts are isolated, so that workers may share memory', async ({
  page,
}) => {
  await page.goto('/sign-in');
  expect(await page.evaluate(() => crossOriginIsolated)).toBe(true);
  const style = await page.locator('link[rel=stylesheet]').first().getAttribute('href');
  const file = await page.request.get(new URL(style!, page.url()).href);
  expect(file.headers()['cross-origin-embedder-policy']).toBe('require-corp');
});

const open = [
  '/sign-in',
  '/reset-password',
  '/reset-password/x',
  '/invitation/x',
  '/mail',
  '/none',
];
const signedIn = ['/team', '/account'];

for (const theme of ['light', 'dark']) {
  for (const width of [1440, 390]) {
    test(`axe finds nothing on the pages of accounts, ${theme}, ${width} px wide`, async ({
      page,
      baseURL,
    }) => {
      await page.setViewportSize({ width, height: 900 });
      await page.context().addCookies([{ name: 'nullwright_theme', value: theme, url: baseURL! }]);
      const look = async (path: string) => {
        await page.goto(path);
        await page.waitForLoadState('networkidle');
        await expectAccessible(page, path);
      };
      for (const path of open) await look(path);
      await signInAs(page, 'lead');
      for (const path of signedIn) await look(path);
      await page.locator('header summary').click();
      await expectAccessible(page, 'the person menu');
    });
  }
}

async function expectAccessible(page: Page, where: string) {
  const { violations } = await new AxeBuilder({ page }).analyze();
  const found = violations.map(({ id, nodes }) => `${id}: ${nodes.map((n) => n.target).join(' ')}`);
  expect(found, where).toEqual([]);
  const sideways = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  );
  expect(sideways, `${where} scrolls sideways`).toBe(0);
}

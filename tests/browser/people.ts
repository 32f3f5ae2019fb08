import type { Page } from 'playwright/test';
import { demoAccounts, demoPassword } from '../../scripts/demo/accounts.mjs';

/** Signs in as the demo's member with this role. */
export async function signInAs(page: Page, role: (typeof demoAccounts)[number]['role']) {
  const account = demoAccounts.find((each) => each.role === role);
  if (!account) throw new Error(`the demo has no ${role}`);
  await page.goto('/sign-in');
  await page.getByLabel('Mail address').fill(account.email);
  await page.getByLabel('Password', { exact: true }).fill(demoPassword);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL('**/studies');
}

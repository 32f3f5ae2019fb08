import { expect, test, type Page } from 'playwright/test';
import { demoAccounts, demoPassword } from '../../scripts/demo/accounts.mjs';
import { lockedContrast } from './small-contrast';

const databaseUrl = process.env['DATABASE_URL'] ?? '';
const recordings = '**/api/recordings/*/file';

async function openRun(page: Page): Promise<void> {
  const size = { sites: ['F3', 'P4'], permutations: 99 };
  const { contrastId } = await lockedContrast(databaseUrl, size);
  const account = demoAccounts.find(({ role }) => role === 'researcher')!;
  await page.goto('/sign-in');
  await page.waitForLoadState('networkidle');
  await page.locator('input[type=email]').fill(account.email);
  await page.locator('input[type=password]').fill(demoPassword);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL('**/studies');
  await page.goto(`/contrasts/${contrastId}/run?workers=1`);
}

const heading = (page: Page, name: string) => page.getByRole('heading', { name, exact: true });

test('a recording with one changed byte is refused, and the right one is taken after', async ({
  page,
}) => {
  await openRun(page);
  await page.route(recordings, async (route) => {
    const response = await route.fetch();
    const body = await response.body();
    body[body.length - 1]! ^= 1;
    await route.fulfill({ response, body });
  });
  await page.getByRole('button', { name: 'Start the run' }).click();
  await expect(heading(page, 'Failed')).toBeVisible({ timeout: 30_000 });
  await expect(page.getByRole('alert')).toContainText('arrived with other bytes');

  await page.unroute(recordings);
  await page.getByRole('button', { name: 'Try again from what was kept' }).click();
  await expect(heading(page, 'Finished')).toBeVisible({ timeout: 60_000 });
});

test('a recording is fetched once, and signing out removes it from the browser', async ({
  page,
}) => {
  await openRun(page);
  let fetches = 0;
  page.on('request', (request) => {
    if (/\/api\/recordings\/.*\/file$/.test(request.url())) fetches += 1;
  });
  for (const name of ['Start the run', 'Run it again']) {
    await page.getByRole('button', { name }).click();
    await expect(heading(page, 'Finished')).toBeVisible({ timeout: 60_000 });
    await page.reload();
  }
  expect(fetches).toBe(1);
  const kept = () => page.evaluate(() => caches.keys());
  expect(await kept()).toContain('nullwright-recordings');
  await page.locator('summary', { hasText: 'researcher' }).click();
  await page.getByRole('button', { name: 'Sign out' }).click();
  await page.waitForURL('**/sign-in');
  expect(await kept()).toEqual([]);
});

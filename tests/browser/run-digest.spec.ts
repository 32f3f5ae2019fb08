import { expect, test, type Page } from 'playwright/test';
import { demoAccounts, demoPassword } from '../../scripts/demo/accounts.mjs';
import { lockedContrast } from './small-contrast';

const databaseUrl = process.env['DATABASE_URL'] ?? '';
const sites = ['F3', 'C3', 'Cz', 'C4', 'P3', 'P4'];

async function signIn(page: Page): Promise<void> {
  const account = demoAccounts.find(({ role }) => role === 'researcher')!;
  await page.goto('/sign-in');
  await page.waitForLoadState('networkidle');
  await page.locator('input[type=email]').fill(account.email);
  await page.locator('input[type=password]').fill(demoPassword);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL('**/studies');
}

const live = (page: Page, state: string) =>
  page.getByRole('heading', { name: state, exact: true, level: 2 });

test('a plan gives the same digest on 1, 2 and 4 workers', async ({ page }) => {
  const { contrastId } = await lockedContrast(databaseUrl, { sites, permutations: 199 });
  await signIn(page);
  for (const workers of [1, 2, 4]) {
    await page.goto(`/contrasts/${contrastId}/run?workers=${workers}`);
    await page.getByRole('button', { name: /^(Start the run|Run it again)$/ }).click();
    await expect(live(page, 'Finished')).toBeVisible({ timeout: 60_000 });
  }
  const { runs } = await (await page.request.get(`/api/contrasts/${contrastId}/runs`)).json();
  expect(runs.map((run: { workerCount: number }) => run.workerCount).sort()).toEqual([1, 2, 4]);
  const digests = new Set(runs.map((run: { digest: string }) => run.digest));
  expect([...digests]).toEqual([expect.stringMatching(/^[0-9a-f]{64}$/)]);
});

test('a paused run stays paused over a reload and goes on from its checkpoint', async ({
  page,
}) => {
  const { contrastId } = await lockedContrast(databaseUrl, { sites, permutations: 50_000 });
  await signIn(page);
  await page.goto(`/contrasts/${contrastId}/run?workers=1`);
  await page.getByRole('button', { name: 'Start the run' }).click();
  // The first finished block draws the null: from then on there is something to lose.
  await expect(page.getByRole('img', { name: /^Histogram of the largest/ })).toBeVisible({
    timeout: 60_000,
  });
  await page.getByRole('button', { name: 'Pause' }).click();
  await expect(live(page, 'Paused')).toBeVisible();
  await expect(page.getByText('paused', { exact: true })).toBeVisible();

  await page.reload();
  await expect(live(page, 'Paused')).toBeVisible();
  await expect(page.getByRole('img', { name: /^Histogram of the largest/ })).toBeVisible({
    timeout: 60_000,
  });
  await page.getByRole('button', { name: 'Go on' }).click();
  await expect(live(page, 'Finished')).toBeVisible({ timeout: 120_000 });
  const { runs } = await (await page.request.get(`/api/contrasts/${contrastId}/runs`)).json();
  expect(runs).toHaveLength(1);
  expect(runs[0].state).toBe('finished');
});

test('a stopped run keeps nothing, and another can begin', async ({ page }) => {
  const { contrastId } = await lockedContrast(databaseUrl, { sites, permutations: 50_000 });
  await signIn(page);
  await page.goto(`/contrasts/${contrastId}/run?workers=1`);
  await page.getByRole('button', { name: 'Start the run' }).click();
  await page.getByRole('button', { name: 'Stop', exact: true }).click();
  await page.getByRole('button', { name: 'Stop and discard' }).click();
  await expect(live(page, 'Stopped')).toBeVisible();
  await page.reload();
  await expect(page.getByText('The last run was stopped')).toBeVisible();
  await expect(page.getByRole('button', { name: 'Start the run' })).toBeEnabled();
});

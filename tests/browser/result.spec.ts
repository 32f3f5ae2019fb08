import { readFile } from 'node:fs/promises';
import AxeBuilder from '@axe-core/playwright';
import pg from 'pg';
import { expect, test, type Page } from 'playwright/test';
import { signInAs } from './people';

const databaseUrl = process.env['DATABASE_URL'] ?? '';

/** A contrast of the demo whose run claims something. */
async function finishedContrast(): Promise<string> {
  const client = new pg.Client({ connectionString: databaseUrl });
  await client.connect();
  try {
    const { rows } = await client.query<{ id: string }>(
      `select plan.contrast_id as id
         from edge join run on run.id = edge.run_id
         join plan on plan.id = run.plan_id
         join team on team.id = run.team_id
        where team.simulated
        group by plan.contrast_id order by min(run.finished_at) limit 1`,
    );
    if (!rows[0]) throw new Error('the demo holds no run with edges: was it seeded?');
    return rows[0].id;
  } finally {
    await client.end();
  }
}

async function open(page: Page): Promise<void> {
  await signInAs(page, 'researcher');
  await page.goto(`/contrasts/${await finishedContrast()}/result?plan=1`);
  await page.waitForLoadState('networkidle');
}

const matrix = (page: Page) => page.getByRole('slider', { name: /^Every pair of sites/ });
const chosen = (page: Page) => page.locator('#chosen-pair');

test('a pair chosen by keyboard in the matrix shows in all figures, and Back returns', async ({
  page,
}) => {
  await open(page);
  const before = (await chosen(page).innerText()).trim();
  await matrix(page).press('ArrowDown');
  await matrix(page).press('ArrowRight');
  await expect(chosen(page)).not.toHaveText(before);
  const [first, second] = (await chosen(page).innerText()).trim().split(' and ');
  await expect(page).toHaveURL(new RegExp(`pair=${first}(,|%2C)${second}`));
  await expect(page.locator('#null-point')).toContainText(`${first} and ${second}`);
  await expect(page.getByText(new RegExp(`^${first} minus ${second} at`))).toBeVisible();

  const shared = page.url();
  await page.goBack();
  await expect(chosen(page)).toHaveText(before);
  await page.goto(shared);
  await expect(chosen(page)).toHaveText(`${first} and ${second}`);
});

test('every p of the table leads to its null', async ({ page }) => {
  await open(page);
  await page
    .getByRole('button', { name: /^p .*show its null/ })
    .first()
    .click();
  await expect(page.locator('#null-point')).toBeFocused();
  await expect(page.locator('#null-point')).toContainText('95 % Monte Carlo interval');
});

test('the edges leave as TSV with the columns that its sidecar describes', async ({ page }) => {
  await open(page);
  await page.getByRole('button', { name: 'Export' }).click();
  const [download] = await Promise.all([
    page.waitForEvent('download'),
    page.getByRole('menuitem', { name: /^Edges, TSV/ }).click(),
  ]);
  const [head] = (await readFile(await download.path(), 'utf8')).split('\n');
  await page.getByRole('button', { name: 'Export' }).click();
  const url = await page.getByRole('menuitem', { name: /JSON/ }).getAttribute('href');
  const sidecar = (await (await page.request.get(url!)).json()) as { Columns: object };
  expect(head!.split('\t')).toEqual(Object.keys(sidecar.Columns));
});

for (const colorScheme of ['light', 'dark'] as const) {
  test(`axe finds nothing on the result and the methods, ${colorScheme}`, async ({ page }) => {
    await page.emulateMedia({ colorScheme });
    await open(page);
    await expect(page.getByRole('slider', { name: /^Time-frequency map/ })).toBeVisible();
    expect((await new AxeBuilder({ page }).analyze()).violations).toEqual([]);
    await page.goto('/methods');
    expect((await new AxeBuilder({ page }).analyze()).violations).toEqual([]);
  });
}

test('the roses state the ISPC and the lag that the chosen edge has in the table', async ({
  page,
}) => {
  await open(page);
  const row = page.locator('section[aria-labelledby="edges"] tbody tr').first();
  await row.click();
  const roses = page.locator('section[aria-labelledby="phases"] figcaption');
  // Site pair, band, time, then ISPC A and B.
  const ofTable = (column: number) => row.locator('td, th').nth(column).innerText();
  await expect(roses.nth(0)).toContainText(`: ISPC ${(await ofTable(3)).trim()}`);
  await expect(roses.nth(1)).toContainText(`: ISPC ${(await ofTable(4)).trim()}`);
});

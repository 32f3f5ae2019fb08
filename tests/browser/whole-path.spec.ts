import pg from 'pg';
import { expect, test, type Page } from 'playwright/test';
import { signInAs } from './people';
import { restRecordings } from './rest-recordings';

/**
 * The product's main job, as a researcher does it: from two recordings to significant edges in
 * PostgreSQL that a viewer can read. With the real recordings the epochs, sites and grid are those
 * of expected.json, an independent NumPy reading (see the recordings' README).
 */

const studyName = `Rest ${Date.now()}`;
const sites = ['F3', 'F4', 'Cz', 'P3', 'Pz', 'P4', 'O1', 'O2'];
const occipital = ['O1', 'O2'];

async function createStudy(page: Page) {
  await page.getByRole('link', { name: 'New study' }).click();
  await page.getByLabel('Name', { exact: true }).fill(studyName);
  await page.getByRole('button', { name: 'Create study' }).click();
  await expect(page.getByRole('heading', { name: studyName })).toBeVisible();
}

async function upload(page: Page, files: string[]) {
  await page.getByRole('link', { name: 'Add recordings' }).click();
  await page.locator('input[type=file]').first().setInputFiles(files);
  const codes = page.getByRole('combobox', { name: 'Participant code' });
  await expect(codes).toHaveCount(files.length);
  for (const code of await codes.all()) await code.fill('S01');
  await page.getByRole('button', { name: `Upload ${files.length} files` }).click();
  for (const name of ['eyes-closed.edf', 'eyes-open.edf']) {
    await expect(page.getByRole('table').getByRole('link', { name, exact: true })).toBeVisible();
  }
}

async function condition(page: Page, letter: 'A' | 'B', name: string, recording: string) {
  await page.getByLabel(`name of ${letter}`).fill(name);
  const rule = page.getByRole('group', { name: `Rule 1 of ${letter}` });
  await rule.getByLabel('recording').selectOption(recording);
  await rule.getByLabel('epochs from').selectOption('evenly spaced');
  await rule.getByLabel(/^from, s/).fill('2');
  await rule.getByLabel(/^to, s/).fill('56');
  await rule.getByLabel(/^every, s/).fill('1');
}

async function define(page: Page) {
  await page.getByRole('link', { name: 'New contrast' }).first().click();
  await page.getByLabel('Name', { exact: true }).fill('Closed against open');
  await page
    .getByLabel('Question in words')
    .fill('Do occipital sites synchronise differently with the eyes closed?');
  await page.getByRole('button', { name: 'Create and define' }).click();
  await page.getByRole('combobox', { name: 'participant' }).selectOption({ index: 1 });
  await condition(page, 'A', 'closed', 'eyes-closed.edf');
  await condition(page, 'B', 'open', 'eyes-open.edf');

  const epochs = page.getByRole('region', { name: 'Epochs', exact: true });
  await epochs.getByLabel('window from, s').fill('0');
  await epochs.getByLabel('to, s', { exact: true }).fill('1');
  await epochs.getByLabel('leave out above, µV').fill('');

  const choice = page.getByRole('region', { name: 'Sites and pairs' });
  await choice.getByRole('button', { name: 'None' }).click();
  for (const site of sites) {
    await choice.getByRole('checkbox', { name: site, exact: true }).check({ force: true });
  }

  const grid = page.getByRole('region', { name: 'Frequency and time' });
  await grid.getByLabel('frequencies', { exact: true }).selectOption('a list');
  await grid.getByLabel('frequencies, low to high, Hz').fill('6, 8, 10, 12, 16, 20, 30');
  await grid.getByLabel('cycles, lowest').fill('5');
  await grid.getByLabel('cycles, highest').fill('5');
  await grid.getByLabel('times from, s').fill('0.1');
  await grid.getByLabel('to, s', { exact: true }).fill('0.9');
  await grid.getByLabel('every, s').fill('0.2');

  const claims = page.getByRole('region', { name: 'Test', exact: true });
  await claims.getByLabel('seed').fill('shore-1');
}

test('a recording becomes significant edges that the team can see', async ({ page, browser }) => {
  const recordings = restRecordings();
  await signInAs(page, 'researcher');
  await createStudy(page);
  await upload(page, [recordings.open, recordings.closed]);
  await page.getByRole('link', { name: 'Contrasts', exact: true }).click();
  await define(page);

  const follows = page.getByRole('complementary', { name: 'What follows from this plan' });
  // 28 pairs x 7 frequencies x 5 times; 1 / (1 + 1000) doubled for two sides is 0.002.
  await expect(follows).toContainText('980');
  await expect(follows).toContainText('55');
  await page.getByRole('button', { name: 'Lock the plan' }).click();
  await page.getByRole('dialog').getByRole('button', { name: /^Lock/ }).click();
  await page.getByRole('link', { name: 'Go to Run' }).click();

  await page.getByRole('button', { name: 'Start the run' }).click();
  await page.getByRole('link', { name: 'See the result' }).click({ timeout: 120_000 });
  await page.waitForURL('**/result**');
  const contrastId = /contrasts\/([0-9a-f-]{36})/.exec(page.url())?.[1] ?? '';

  const edges = await edgesInDatabase(contrastId);
  const nearAlpha = edges.filter(
    (edge) =>
      edge.from_hz <= 10 &&
      edge.to_hz >= 8 &&
      (occipital.includes(edge.site_j) || occipital.includes(edge.site_k)),
  );
  expect(nearAlpha.length).toBeGreaterThan(0);
  for (const edge of edges) {
    expect(edge.adjusted_p).toBeLessThanOrEqual(0.05);
    expect(edge.epochs_a).toBe(55);
    expect(edge.epochs_b).toBe(55);
  }
  const { site_j, site_k } = nearAlpha[0];
  await expect(
    page
      .getByRole('row')
      .filter({ hasText: `${site_j} – ${site_k}` })
      .first(),
  ).toBeVisible();

  await viewerReadsOnly(
    await browser.newContext().then((context) => context.newPage()),
    contrastId,
  );
});

interface EdgeRow {
  site_j: string;
  site_k: string;
  from_hz: number;
  to_hz: number;
  adjusted_p: number;
  epochs_a: number;
  epochs_b: number;
}

/** Straight from PostgreSQL, past the application. */
async function edgesInDatabase(contrastId: string): Promise<EdgeRow[]> {
  const client = new pg.Client({ connectionString: process.env['DATABASE_URL'] });
  await client.connect();
  try {
    const found = await client.query<EdgeRow>(
      `select site_j, site_k, from_hz, to_hz, adjusted_p,
              (run.facts ->> 'keptA')::int as epochs_a, (run.facts ->> 'keptB')::int as epochs_b
       from edge join run on run.id = edge.run_id join plan on plan.id = run.plan_id
       where plan.contrast_id = $1 and run.state = 'finished'`,
      [contrastId],
    );
    return found.rows;
  } finally {
    await client.end();
  }
}

async function viewerReadsOnly(page: Page, contrastId: string) {
  await signInAs(page, 'viewer');
  await page.goto(`/contrasts/${contrastId}/result`);
  await expect(page.getByRole('heading', { name: 'Edges', exact: true })).toBeVisible();
  await page.goto(`/contrasts/${contrastId}/define`);
  await expect(page.getByRole('heading', { name: 'Closed against open' })).toBeVisible();
  await expect(page.getByRole('button', { name: 'Change it in a new version' })).toHaveCount(0);
  await page.goto(`/contrasts/${contrastId}/run`);
  await expect(page.getByRole('button', { name: /^Start|again/ })).toHaveCount(0);
  const refused = await page.request.post(`/api/contrasts/${contrastId}/runs`, {
    data: { planHash: '0'.repeat(64), engineVersion: '1', workerCount: 1 },
  });
  expect(refused.status()).toBe(403);
}

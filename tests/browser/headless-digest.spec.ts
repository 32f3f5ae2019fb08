import { execFile } from 'node:child_process';
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { promisify } from 'node:util';
import pg from 'pg';
import { expect, test, type Page } from 'playwright/test';
import { signInAs } from './people';
import { lockedContrast } from './small-contrast';

/** What a person does to repeat a run elsewhere: takes the plan and the recording, and runs them. */

const databaseUrl = process.env['DATABASE_URL'] ?? '';
const size = { sites: ['F3', 'C3', 'Cz', 'C4', 'P3', 'P4'], permutations: 499 };

let folder: string;
test.beforeAll(async () => {
  folder = await mkdtemp(path.join(tmpdir(), 'nullwright-headless-'));
});
test.afterAll(() => rm(folder, { recursive: true }));

async function digestInBrowser(page: Page, contrastId: string): Promise<string> {
  await page.goto(`/contrasts/${contrastId}/run?workers=2`);
  await page.getByRole('button', { name: 'Start the run' }).click();
  await expect(page.getByRole('heading', { name: 'Finished', exact: true })).toBeVisible({
    timeout: 60_000,
  });
  const { runs } = await (await page.request.get(`/api/contrasts/${contrastId}/runs`)).json();
  return runs[0].digest;
}

/** The plan as the Define page gives it away. */
async function downloadPlan(page: Page, contrastId: string): Promise<string> {
  await page.goto(`/contrasts/${contrastId}/define`);
  const [download] = await Promise.all([
    page.waitForEvent('download'),
    page.getByRole('link', { name: 'Download', exact: true }).click(),
  ]);
  const file = path.join(folder, 'plan.json');
  await download.saveAs(file);
  return file;
}

async function downloadRecording(page: Page, sha256: string): Promise<string> {
  const client = new pg.Client({ connectionString: databaseUrl });
  await client.connect();
  const { rows } = await client
    .query<{ id: string }>('select id from recording where sha256 = $1', [sha256])
    .finally(() => client.end());
  const answer = await page.request.get(`/api/recordings/${rows[0]!.id}/file`);
  expect(answer.status()).toBe(200);
  const file = path.join(folder, 'recording.edf');
  await writeFile(file, await answer.body());
  return file;
}

test('the digest of a run in Chromium is that of the same plan and seed without a browser', async ({
  page,
}) => {
  const { contrastId, hash } = await lockedContrast(databaseUrl, size);
  await signInAs(page, 'researcher');
  const digest = await digestInBrowser(page, contrastId);

  const planFile = await downloadPlan(page, contrastId);
  const plan = JSON.parse(await readFile(planFile, 'utf8'));
  const recording = await downloadRecording(page, plan.recordings[0].sha256);
  const headless = async (out: string, ...more: string[]) => {
    const run = ['--plan', planFile, '--recording', recording, '--out', path.join(folder, out)];
    await promisify(execFile)(process.execPath, ['scripts/contrast.mjs', ...run, ...more]);
    return JSON.parse(await readFile(path.join(folder, out, 'result.json'), 'utf8'));
  };
  expect(await headless('same', '--workers', '3')).toMatchObject({ planHash: hash, digest });
  expect((await headless('other', '--seed', 'another')).digest).not.toBe(digest);
});

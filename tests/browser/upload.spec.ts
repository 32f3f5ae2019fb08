import { randomUUID } from 'node:crypto';
import { expect, test, type Page } from 'playwright/test';
import { writeEdf } from '../../workers/engine/read';
import { signInAs } from './people';

/** A recording whose header names a person. */
function namedRecording(seconds: number, siteCount: number) {
  const samplesPerRecord = 512;
  const samples = Float32Array.from(
    { length: seconds * samplesPerRecord },
    (_, i) => Math.sin(i / 9) * 50,
  );
  const signal = { unit: 'uV', physicalMin: -500, physicalMax: 500, samplesPerRecord, samples };
  const bytes = writeEdf({
    patient: 'MRN17 F 02-MAY-1980 P._Example',
    startedAt: '2024-03-05T10:20:30',
    recordDurationS: 1,
    signals: Array.from({ length: siteCount }, (_, i) => ({ ...signal, label: `E${i + 1}` })),
    annotations: [{ onsetS: 1, text: 'go' }],
  });
  return Buffer.from(bytes);
}

async function openNewStudy(page: Page) {
  await signInAs(page, 'researcher');
  await page.goto('/studies?new');
  await page.getByLabel('Name', { exact: true }).fill(`Uploads ${randomUUID()}`);
  await page.getByRole('button', { name: 'Create study' }).click();
  await page.waitForURL(/studies\/[0-9a-f-]{36}$/);
  await page.goto(`${page.url()}/recordings`, { waitUntil: 'networkidle' });
}

test('a recording goes in with its sidecar, its identifying fields shown and blanked', async ({
  page,
}) => {
  await openNewStudy(page);
  const mimeType = 'application/octet-stream';
  const events = Buffer.from('onset\tduration\ttrial_type\n0.5\t0\tcued\n1.5\t0\tfree\n');
  await page.getByLabel('EDF files and sidecars').setInputFiles([
    { name: 'sub-07_task-tap_eeg.edf', mimeType, buffer: namedRecording(4, 2) },
    { name: 'sub-07_task-tap_events.tsv', mimeType, buffer: events },
  ]);
  const row = page.getByRole('listitem').filter({ hasText: 'sub-07_task-tap_eeg.edf' }).first();
  await expect(row.getByText('P. Example')).toBeVisible();
  await expect(row.getByLabel('Participant code')).toHaveValue('07');
  await page.getByRole('button', { name: 'Upload 1 file' }).click();
  await expect(row.getByText('Stored.')).toBeVisible();

  const listed = page.getByRole('row').filter({ hasText: 'sub-07_task-tap_eeg.edf' });
  await expect(listed).toContainText('cued 1, free 1');
  await listed.getByRole('link', { name: 'sub-07_task-tap_eeg.edf', exact: true }).click();
  await page.waitForURL(/recordings\/[0-9a-f-]{36}$/);
  const id = page.url().split('/').at(-1);
  const stored = await page.request.get(`/api/recordings/${id}/file`);
  expect((await stored.body()).toString('latin1')).not.toContain('Example');
});

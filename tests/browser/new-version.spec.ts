import { expect, test } from 'playwright/test';
import { signInAs } from './people';

/**
 * A second version of the demo's finished contrast: another measure, every correction, locked with
 * a reason. In the simulation C3 and P4 are coupled with a lag, F8 and FC6 only share a source
 * without one; a measure that is blind to zero lag must claim the first and not the second.
 */
test('a new version with a reason judges by every correction, blind to zero lag', async ({
  page,
}) => {
  await signInAs(page, 'researcher');
  await page.getByRole('link', { name: 'Paced tapping' }).first().click();
  await page.getByRole('link', { name: /^Cued against free/ }).click();
  await page.getByRole('link', { name: /^Define/ }).click();
  await page.getByRole('button', { name: 'Change it in a new version' }).click();

  const measures = page.getByRole('radiogroup', { name: 'Measure' });
  await measures
    .getByRole('radio', { name: /^Weighted phase lag index As/ })
    .check({ force: true });
  const claims = page.getByRole('region', { name: 'Test', exact: true });
  for (const box of await claims.getByRole('checkbox').all()) await box.check();
  await expect(page.getByText(/^Saved/)).toBeVisible();
  await page.getByRole('button', { name: 'Lock the plan' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByRole('button', { name: /^Lock/ }).click();
  await expect(dialog).toContainText('Say why');
  await dialog.getByRole('textbox').fill('Neighbours share sources at zero lag.');
  await dialog.getByRole('button', { name: /^Lock/ }).click();

  await page.getByRole('link', { name: 'Go to Run' }).click();
  await page.getByRole('button', { name: 'Start the run' }).click();
  await page.getByRole('link', { name: 'See the result' }).click({ timeout: 120_000 });
  await expect(page.getByRole('heading', { name: 'Edges', exact: true })).toBeVisible();
  await expect(page.getByText('Neighbours share sources at zero lag.')).toBeVisible();
  const table = page.getByRole('region', { name: 'Edges', exact: true });
  await expect(table.getByRole('row').filter({ hasText: 'C3 – P4' }).first()).toBeVisible();
  await expect(table.getByRole('row').filter({ hasText: 'F8 – FC6' })).toHaveCount(0);
  // The page moves between the corrections the plan names, and each has its null.
  for (const choice of await page.getByRole('radio').all()) {
    await choice.check({ force: true });
    await expect(page.getByRole('heading', { name: 'Edges', exact: true })).toBeVisible();
  }
});

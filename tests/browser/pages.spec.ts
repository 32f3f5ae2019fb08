import AxeBuilder from '@axe-core/playwright';
import { expect, test, type Page } from 'playwright/test';
import { signInAs } from './people';

/**
 * Every page of the application, on a desk and on a phone, light and dark: no violation of WCAG
 * 2.2 AA that axe can see, no error in the console, nothing that scrolls sideways.
 */

interface PageToSee {
  name: string;
  /** Where it is, from the ids of the demo. */
  path: (demo: Demo) => string;
  heading: string | RegExp;
  signedOut?: boolean;
  /** The server answers with an error page on purpose. */
  refused?: boolean;
}

interface Demo {
  study: string;
  recording: string;
  finished: string;
  ready: string;
  draft: string;
}

const pages: PageToSee[] = [
  { name: 'sign in', path: () => '/sign-in', heading: 'Sign in', signedOut: true },
  { name: 'reset', path: () => '/reset-password', heading: /password/i, signedOut: true },
  {
    name: 'reset with a dead link',
    path: () => '/reset-password/not-a-token-that-was-ever-sent',
    heading: /link|password/i,
    signedOut: true,
  },
  {
    name: 'invitation with a dead link',
    path: () => '/invitation/not-a-token-that-was-ever-sent',
    heading: /invitation|link/i,
    signedOut: true,
  },
  { name: 'methods', path: () => '/methods', heading: 'Methods', signedOut: true },
  { name: 'kept mails', path: () => '/mail', heading: /mail/i },
  { name: 'studies', path: () => '/studies', heading: 'Studies' },
  { name: 'new study', path: () => '/studies?new', heading: 'Studies' },
  { name: 'study', path: (demo) => `/studies/${demo.study}`, heading: 'Paced tapping' },
  {
    name: 'recordings',
    path: (demo) => `/studies/${demo.study}/recordings`,
    heading: 'Paced tapping',
  },
  {
    name: 'recording',
    path: (demo) => `/studies/${demo.study}/recordings/${demo.recording}`,
    heading: /P01 tapping/,
  },
  {
    name: 'define, a draft',
    path: (demo) => `/contrasts/${demo.draft}/define`,
    heading: /^Draft/,
  },
  {
    name: 'define, locked',
    path: (demo) => `/contrasts/${demo.ready}/define`,
    heading: 'Every pair, P01',
  },
  {
    name: 'run, ready',
    path: (demo) => `/contrasts/${demo.ready}/run`,
    heading: 'Every pair, P01',
  },
  {
    name: 'result, none yet',
    path: (demo) => `/contrasts/${demo.ready}/result`,
    heading: 'Every pair, P01',
  },
  {
    name: 'run, finished',
    path: (demo) => `/contrasts/${demo.finished}/run`,
    heading: 'Cued against free tapping',
  },
  {
    name: 'result',
    path: (demo) => `/contrasts/${demo.finished}/result`,
    heading: 'Cued against free tapping',
  },
  { name: 'team', path: () => '/team', heading: /Tidewater|Team/ },
  { name: 'account', path: () => '/account', heading: /account/i },
  { name: 'nothing there', path: () => '/no-such-page', heading: /not|nothing/i, refused: true },
];

async function idFrom(page: Page, link: string | RegExp, pattern: RegExp): Promise<string> {
  const href = await page.getByRole('link', { name: link }).first().getAttribute('href');
  const id = pattern.exec(href ?? '')?.[1];
  if (!id) throw new Error(`the link ${String(link)} leads to ${href}`);
  return id;
}

async function findDemo(page: Page): Promise<Demo> {
  await page.goto('/studies');
  const study = await idFrom(page, 'Paced tapping', /studies\/([0-9a-f-]{36})/);
  await page.goto(`/studies/${study}`);
  const finished = await idFrom(page, /^Cued against free/, /contrasts\/([0-9a-f-]{36})/);
  const ready = await idFrom(page, /^Every pair, P01/, /contrasts\/([0-9a-f-]{36})/);
  await page.goto(`/studies/${study}/recordings`);
  const recording = await idFrom(page, /^P01 tapping/, /recordings\/([0-9a-f-]{36})/);
  return { study, recording, finished, ready, draft: await makeDraft(page, study) };
}

/** A draft whose participant is chosen, so that the whole form stands. */
async function makeDraft(page: Page, study: string): Promise<string> {
  await page.goto(`/studies/${study}`);
  await page.getByRole('link', { name: 'New contrast' }).first().click();
  await page.getByLabel('Name', { exact: true }).fill(`Draft ${Date.now()}`);
  await page.getByLabel('Question in words').fill('Does every control of the form stand?');
  await page.getByRole('button', { name: 'Create and define' }).click();
  await page.getByRole('combobox', { name: 'participant' }).selectOption({ index: 1 });
  await expect(page.getByText(/^Saved/)).toBeVisible();
  return /contrasts\/([0-9a-f-]{36})/.exec(page.url())?.[1] ?? '';
}

const views = [
  { width: 1440, height: 900, theme: 'light' },
  { width: 390, height: 844, theme: 'dark' },
] as const;

async function see(page: Page, each: PageToSee, demo: Demo, errors: string[]) {
  const response = await page.goto(each.path(demo));
  expect(response?.ok() ?? false, `${each.name}: ${response?.status()}`).toBe(!each.refused);
  await expect(page.getByRole('heading', { level: 1, name: each.heading })).toBeVisible();
  await page.waitForLoadState('networkidle');
  const overflow = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  );
  expect(overflow, `${each.name} scrolls sideways`).toBeLessThanOrEqual(0);
  const { violations } = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa', 'best-practice'])
    .analyze();
  const found = violations.map(
    ({ id, nodes }) => `${id}: ${nodes.map((node) => node.target.join(' ')).join('; ')}`,
  );
  expect(found, each.name).toEqual([]);
  // A page that is refused on purpose is logged by the browser as a failed load.
  if (!each.refused) expect(errors, each.name).toEqual([]);
  errors.length = 0;
}

for (const { width, height, theme } of views) {
  test.describe(`${width} px, ${theme}`, () => {
    test.use({ viewport: { width, height } });

    test('pages for the signed-out', async ({ page, baseURL }) => {
      await withTheme(page, theme, baseURL);
      const errors = listen(page);
      const nothing = { study: '', recording: '', finished: '', ready: '', draft: '' };
      for (const each of pages.filter((one) => one.signedOut))
        await see(page, each, nothing, errors);
    });

    test('pages of a team', async ({ page, baseURL }) => {
      await signInAs(page, 'lead');
      const demo = await findDemo(page);
      await withTheme(page, theme, baseURL);
      const errors = listen(page);
      for (const each of pages.filter((one) => !one.signedOut)) await see(page, each, demo, errors);
    });
  });
}

async function withTheme(page: Page, theme: 'light' | 'dark', baseURL: string | undefined) {
  await page.context().addCookies([{ name: 'nullwright_theme', value: theme, url: baseURL ?? '' }]);
  await page.goto('/methods');
  await expect(page.locator('html')).toHaveAttribute('data-theme', theme);
}

function listen(page: Page): string[] {
  const errors: string[] = [];
  page.on('pageerror', (error) => errors.push(error.message));
  page.on('console', (message) => {
    if (message.type() === 'error') errors.push(message.text());
  });
  return errors;
}

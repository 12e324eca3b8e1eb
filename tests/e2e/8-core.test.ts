import { readFileSync } from 'node:fs';
import { expect, type Page, test } from '@playwright/test';
import { experimentByScript, expectSound, openPlaces, readRun, signIn } from './support';

interface Exported {
  numerics: { equations: string };
  length: { days: number };
}

const finished = (page: Page, id: string) =>
  expect.poll(async () => (await readRun(page, id)).state, { timeout: 120_000, intervals: [1000] }).toBe('finished');

// The nonlinear core as a person meets it: written, sketched, exported, queued, repeated and held on three grids.
test('a modeller sketches a nonlinear setup, exports it, queues it, repeats it and asks whether the grid is fine enough', async ({
  page,
  browser,
}) => {
  test.setTimeout(560_000);
  await openPlaces(browser);
  await signIn(page, 'modeller');
  const experiment = await experimentByScript(page, 'Does the small basin repeat when its currents carry momentum?');
  await page.goto(`/experiments/${experiment}`);
  await page.getByLabel('Start from').selectOption({ label: 'First look' });
  await page.getByRole('button', { name: 'Set up the control run' }).click();
  const preflight = page.getByRole('complementary', { name: 'Preflight' });
  await expect(preflight).toContainText('wave speed');

  // The nonlinear equations bring their own fields and rules.
  await page.getByLabel('Equations').selectOption('nonlinear');
  await expect(page.getByRole('spinbutton', { name: /Minimum thickness/ })).toBeVisible();
  await page.getByRole('spinbutton', { name: /Steps a day/ }).fill('24');
  await page.getByRole('spinbutton', { name: /^Length/ }).fill('730');
  await page.getByLabel('Label of the run').fill('Currents with momentum');
  await expect(page.getByRole('button', { name: 'Queue this run' })).toBeEnabled();

  // A sketch draws before anything is queued, and says what its grid cannot show.
  const sketch = page.getByRole('region', { name: 'Sketch' });
  await sketch.getByRole('button', { name: 'Sketch' }).click();
  await expect(sketch.locator('.heatmaplayer').first()).toBeAttached({ timeout: 60_000 });
  await expect(sketch.getByText(/[0-9a-f]{64}/)).toBeVisible({ timeout: 90_000 });
  await expect(sketch.getByRole('list', { name: /what its grid cannot show/ })).toContainText('cells');
  // From the top: a field that the head covers in part would count as too small to touch.
  await page.evaluate(() => window.scrollTo(0, 0));
  await expectSound(page);
  await page.getByRole('spinbutton', { name: /Rayleigh drag/ }).fill('2e-8');
  await expect(sketch.getByText('outdated')).toBeVisible();

  const [download] = await Promise.all([
    page.waitForEvent('download'),
    page.getByRole('button', { name: 'Export setup' }).click(),
  ]);
  const exported = JSON.parse(readFileSync(await download.path(), 'utf8')) as Exported;
  expect(exported).toMatchObject({ numerics: { equations: 'nonlinear' }, length: { days: 730 } });
  await page.getByLabel('Open a setup file').setInputFiles({
    name: 'other.json',
    mimeType: 'application/json',
    buffer: Buffer.from(JSON.stringify({ ...exported, length: { days: 0 } })),
  });
  await expect(page.getByText(/Length must be between 1 and/).first()).toBeVisible();
  await page.getByLabel('Open a setup file').setInputFiles(await download.path());
  await expect(page.getByText(/Length must be between 1 and/)).toHaveCount(0);

  await page.getByLabel('Label of the run').fill('Currents with momentum');
  await page.getByRole('button', { name: 'Queue this run' }).click();
  await expect(page).toHaveURL(/\/runs\/[0-9a-f-]{36}$/);
  const id = page.url().split('/').at(-1)!;
  await finished(page, id);
  const evidence = page.getByRole('listitem').filter({ has: page.getByRole('heading', { name: 'Budgets closed' }) });
  await expect(evidence).toContainText('closed to round-off');

  // Two more grids: what they cost comes first; then three values of each transport.
  await page.getByRole('button', { name: 'Queue at half and twice the resolution …' }).click();
  const dialog = page.getByRole('dialog');
  await expect(dialog.getByRole('table')).toContainText('160 × 120');
  await dialog.getByRole('button', { name: 'Queue both' }).click();
  const grids = page.getByRole('list', { name: 'The same setup on other grids' });
  await expect(grids.getByRole('listitem')).toHaveCount(2);
  await expect(page.getByRole('region', { name: 'Transports at three resolutions' })).toContainText('Equator', {
    timeout: 180_000,
  });
  await page.evaluate(() => window.scrollTo(0, 0));
  await expectSound(page);

  await page.getByRole('button', { name: 'Repeat and verify' }).click();
  await expect(page).not.toHaveURL(new RegExp(id), { timeout: 20_000 });
  await finished(page, page.url().split('/').at(-1)!);
  await expect(page.getByText(/same to the last bit as Currents with momentum/).first()).toBeVisible({
    timeout: 20_000,
  });
});

test('help shows what the core was held against, in words and numbers', async ({ page }) => {
  await signIn(page, 'reviewer');
  await page.getByRole('tab', { name: 'Help' }).click();
  await expect(page.getByRole('heading', { name: 'Help', level: 1 })).toBeVisible();
  const table = page.getByRole('region', { name: /Cases of the verification/ });
  await expect(table.getByRole('row').filter({ hasText: 'Stommel (1948)' }).first()).toContainText('passed');
  await expect(table.getByText('failed')).toHaveCount(0);
  await expectSound(page);
});

import { expect, test } from '@playwright/test';
import { expectSound, openPlaces, readRun, signIn } from './support';

test('a modeller asks, sets up with the preflight at hand, queues, watches, stops, resumes and extends', async ({
  page,
  browser,
}) => {
  test.setTimeout(480_000);
  await openPlaces(browser);
  await signIn(page, 'modeller');
  await page.getByRole('tab', { name: 'Experiments' }).click();
  await expect(page.getByText(/Halcyon wind/).first()).toBeVisible();
  await expectSound(page);

  await page.getByRole('button', { name: 'New experiment' }).click();
  const dialog = page.getByRole('dialog');
  await dialog.getByLabel('Question').fill('Why?');
  await dialog.getByRole('button', { name: /Begin|Create|Ask|Start/ }).click();
  await expect(dialog.getByText(/at least 8 characters/)).toBeVisible();
  await dialog.getByLabel('Question').fill('How soon does the small basin repeat its season?');
  await dialog.getByRole('button', { name: /Begin|Create|Ask|Start/ }).click();
  await expect(page.getByRole('heading', { level: 1 })).toHaveText('How soon does the small basin repeat its season?');
  await expectSound(page);

  await page.getByLabel('Start from').selectOption({ label: 'First look' });
  await page.getByRole('button', { name: 'Set up the control run' }).click();
  const preflight = page.getByRole('complementary', { name: 'Preflight' });
  await expect(preflight).toContainText('wave speed');
  await expect(preflight).toContainText('2.45');

  // A number outside its range is refused at the field, with the range; nothing can be queued meanwhile.
  const thickness = page.getByRole('spinbutton', { name: /Thickness at rest/ });
  await thickness.fill('5');
  await expect(page.getByText(/Thickness at rest must be between 10 and 5000 m/).first()).toBeVisible();
  await expect(page.getByRole('button', { name: 'Queue this run' })).toBeDisabled();
  await thickness.fill('200');

  // An unstable step is refused with a remedy that cures it.
  const steps = page.getByRole('spinbutton', { name: /Steps a day/ });
  await steps.fill('8');
  await expect(preflight.getByText('refused').first()).toBeVisible();
  await preflight
    .getByRole('button', { name: /a day$/ })
    .first()
    .click();
  await expect(preflight.getByText('refused')).toHaveCount(0);
  expect(Number(await steps.inputValue())).toBeGreaterThan(8);

  // What is typed survives a reload.
  // Short steps, so that the run lasts long enough to be stopped.
  await steps.fill('96');
  await page.getByRole('spinbutton', { name: /^Length/ }).fill('7300');
  await page.getByLabel('Label of the run').fill('Long control');
  await page.reload();
  await expect(page.getByLabel('Label of the run')).toHaveValue('Long control');
  await expectSound(page);

  // An island by its coordinates, and a wind component, by their fields.
  await page.getByRole('button', { name: 'Add a box' }).click();
  const edges = { 'West edge': '25', 'East edge': '27', 'South edge': '3', 'North edge': '5' };
  for (const [edge, degrees] of Object.entries(edges))
    await page
      .getByRole('spinbutton', { name: new RegExp(edge) })
      .last()
      .fill(degrees);
  await expect(page.getByRole('button', { name: 'Queue this run' })).toBeEnabled();
  await page.getByRole('button', { name: 'Add a component' }).click();
  await expect(page.getByRole('group', { name: /Wind component/ })).toHaveCount(3);
  await page
    .getByRole('button', { name: /^Remove/ })
    .last()
    .scrollIntoViewIfNeeded();

  await page.getByRole('button', { name: 'Queue this run' }).click();
  await expect(page).toHaveURL(/\/runs\/[0-9a-f-]{36}$/);
  const id = page.url().split('/').at(-1)!;
  await expect(page.getByText('running').first()).toBeVisible({ timeout: 30_000 });
  await expect(page.getByRole('heading', { level: 1 })).toContainText('Long control');

  // It grows by itself; coming in the middle shows the same.
  const frames = async () => (await readRun(page, id)).progress.records.frames;
  await expect.poll(frames, { timeout: 30_000 }).toBeGreaterThan(20);
  await expect(page.locator('.heatmaplayer').first()).toBeAttached({ timeout: 30_000 });
  const again = await page.context().newPage();
  await again.goto(`/runs/${id}`);
  await expect(again.locator('.heatmaplayer').first()).toBeAttached({ timeout: 30_000 });
  await again.close();

  // Stop answers at once and stays; resume goes on from there.
  await page.getByRole('button', { name: 'Stop', exact: true }).click();
  await expect(page.getByRole('button', { name: 'Resume' })).toBeVisible();
  const stopped = await readRun(page, id);
  expect(stopped.state).toBe('stopped');
  expect(stopped.progress.step).toBeGreaterThan(0);
  await expectSound(page);
  await page.getByRole('button', { name: 'Resume' }).click();
  await expect
    .poll(async () => (await readRun(page, id)).state, { timeout: 150_000, intervals: [1000] })
    .toBe('finished');
  await expect(page.getByText(/[0-9a-f]{64}/).first()).toBeVisible();

  // A finished run extends into a new one that goes on from its last state.
  await page.getByRole('button', { name: 'Extend' }).click();
  const extend = page.getByRole('dialog');
  await extend.getByLabel('Days beyond the end').fill('365');
  await extend.getByRole('button', { name: /Extend|Queue/ }).click();
  await expect(page).not.toHaveURL(new RegExp(id));
  await expect(page.getByText('goes on from the last state of')).toBeVisible();
  const extension = page.url().split('/').at(-1)!;
  await expect
    .poll(async () => (await readRun(page, extension)).state, { timeout: 60_000, intervals: [500] })
    .toBe('finished');
  expect((await readRun(page, extension)).progress.day).toBe(7300 + 365);
});

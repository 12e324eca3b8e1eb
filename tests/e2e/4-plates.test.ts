import { readFileSync } from 'node:fs';
import { type Page, expect, test } from '@playwright/test';
import { experimentByScript, expectAccessible, firstLook, openPlaces, runByScript, signIn } from './support';

async function saved(page: Page, press: () => Promise<void>): Promise<{ name: string; bytes: Buffer }> {
  const [download] = await Promise.all([page.waitForEvent('download'), press()]);
  return { name: download.suggestedFilename(), bytes: readFileSync(await download.path()) };
}

test('any line, variable and day of a finished run can be drawn, read and saved', async ({ page, browser }) => {
  await openPlaces(browser);
  await signIn(page, 'modeller');
  const experiment = await experimentByScript(page, 'What do the plates of a finished run show?');
  const run = await runByScript(page, experiment, { label: 'Plates', setup: await firstLook(page) });
  await page.goto(`/runs/${run.id}`);
  const space = page.getByRole('region', { name: 'Space and time' });
  const hovmoller = space.getByRole('figure').first();
  const map = space.getByRole('figure').nth(1);
  await expect(hovmoller.locator('.heatmaplayer')).toBeAttached({ timeout: 30_000 });

  // Any variable along any longitude or latitude, after the fact, from the frames.
  await hovmoller.getByLabel('Variable').selectOption('vCentre');
  await hovmoller.getByRole('combobox', { name: 'along' }).selectOption('longitude');
  await hovmoller.getByLabel('Longitude, degrees east').fill('20');
  await hovmoller.getByLabel('Longitude, degrees east').press('Enter');
  await expect(hovmoller.getByRole('heading')).toContainText(/20(\.25)?°\sE/);
  await expect(hovmoller).toContainText('m/s');

  // The cursor reads a value with its unit, by keyboard alone.
  const plot = map.getByRole('application');
  await plot.focus();
  await plot.press('Enter');
  await plot.press('ArrowRight');
  await plot.press('ArrowUp');
  await expect(map).toContainText(/[−+]?\d+(\.\d+)?\s?m\b/);
  await plot.press('Escape');

  // The map steps and plays.
  const day = map.getByRole('heading');
  const slider = map.getByRole('slider');
  await slider.focus();
  await slider.press('Home');
  await expect(day).toContainText(/Day\s0\b/);
  await slider.press('ArrowRight');
  await expect(day).toContainText(/Day\s5\b/);
  await map.getByRole('button', { name: 'Play' }).click();
  await expect(day).not.toContainText(/Day\s(0|5)\b/, { timeout: 15_000 });
  await map.getByRole('button', { name: /Pause|Stop|Hold/ }).click();

  // A plate is saved as PNG, as SVG, and its data as CSV with the caution.
  const png = await saved(page, () => hovmoller.getByRole('button', { name: /as PNG$/ }).click());
  expect(png.name).toMatch(/\.png$/);
  expect(png.bytes.subarray(1, 4).toString()).toBe('PNG');
  expect(png.bytes.length).toBeGreaterThan(10_000);
  const svg = await saved(page, () => hovmoller.getByRole('button', { name: /as SVG$/ }).click());
  expect(svg.bytes.toString('utf8')).toContain('<svg');
  const csv = await saved(page, () => hovmoller.getByRole('button', { name: /as CSV$/ }).click());
  const text = csv.bytes.toString('utf8');
  expect(text).toContain('not a forecast');
  const rows = text.split(/\r?\n/).filter((line) => line !== '' && !line.startsWith('#'));
  // Along a longitude: a row for each of the 61 rows of v points or 60 of centres, a column for each of the 220 frames
  // of three years, every five days.
  expect(rows.length).toBeGreaterThan(60);
  expect(rows.at(-1)!.split(',').length).toBeGreaterThanOrEqual(220);
  await expectAccessible(page);

  // The same numbers as a table to read.
  await hovmoller.getByRole('button', { name: /as a table$/ }).click();
  await expect(page.getByRole('dialog').getByRole('table')).toBeVisible();
  await page.keyboard.press('Escape');

  // Transports, budgets and moorings are drawn too, and the budget says that it closes.
  await expect(page.getByRole('region', { name: 'Transports' }).locator('.scatterlayer').first()).toBeAttached();
  await expect(page.getByRole('region', { name: 'Budgets' })).toContainText('closes');
});

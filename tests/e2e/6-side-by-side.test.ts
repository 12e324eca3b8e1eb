import { type Page, expect, test } from '@playwright/test';
import { experimentByScript, expectSound, firstLook, openPlaces, pageAs, runByScript, signIn } from './support';

/** Chooses a run of the picker by the beginning of its entry. */
const pick = (page: Page, name: RegExp) => page.getByRole('dialog').getByRole('button', { name }).click();

test('a reviewer lays two runs side by side, and the address carries the pair', async ({ page, browser }) => {
  test.setTimeout(240_000);
  await openPlaces(browser);
  const modeller = await pageAs(browser, 'modeller');
  const experiment = await experimentByScript(modeller, 'Is the small basin linear in its season?');
  const weak = await runByScript(modeller, experiment, { label: 'Weak', setup: await firstLook(modeller) });
  const strong = await runByScript(modeller, experiment, {
    label: 'Strong',
    setup: await firstLook(modeller, (setup) => (setup.wind.seasonalStrength = 1.5)),
    parentRunId: weak.id,
  });
  await modeller.context().close();

  await signIn(page, 'reviewer');
  await page.goto('/side-by-side');
  await page.getByRole('button', { name: 'Choose run A' }).click();
  await pick(page, /^Weak\b.*linear in its season/);
  await page.getByRole('button', { name: 'Choose run B' }).click();
  await pick(page, /^Strong\b.*linear in its season/);
  await expect(page).toHaveURL(new RegExp(`a=${weak.id}.*b=${strong.id}`));
  await expect(page.locator('.heatmaplayer')).toHaveCount(3, { timeout: 30_000 });

  // What differs, and how far apart they are.
  await expect(page.getByRole('region', { name: 'Settings that differ' })).toContainText(/seasonal strength/i);
  // The whole run's measures: the steady belt is the same in both, so the patterns are alike but not equal.
  const measures = page.getByRole('table').filter({ has: page.getByRole('columnheader', { name: 'correlation' }) });
  const thickness = measures.getByRole('row').filter({ hasText: /thickness/i });
  await expect(thickness.getByRole('cell').last()).toHaveText(/^0\.\d+$/, { timeout: 30_000 });

  // One cursor in all three: what is read in A is read in B and B − A at the same place.
  const first = page.getByRole('application').first();
  await first.focus();
  await first.press('Enter');
  await first.press('ArrowRight');
  await expect(page.getByText(/^cursor/)).toBeVisible();
  await first.press('Escape');

  // Swapping and a copied address keep the pair.
  await page.getByRole('button', { name: 'Swap A and B' }).click();
  await expect(page).toHaveURL(new RegExp(`a=${strong.id}.*b=${weak.id}`));
  const address = page.url();
  await page.goto('/');
  await page.goto(address);
  await expect(page.locator('.heatmaplayer')).toHaveCount(3, { timeout: 30_000 });
  await expectSound(page);

  await page.getByRole('button', { name: 'Space and time' }).click();
  await expect(page).toHaveURL(/hovmoller/);
  await expect(page.locator('.heatmaplayer')).toHaveCount(3);
});

import { expect, test } from '@playwright/test';
import { experimentByScript, expectSound, firstLook, openPlaces, runByScript, signIn } from './support';

test('a sensitivity run starts from a run, marks what differs, and stands in the descent', async ({
  page,
  browser,
}) => {
  await openPlaces(browser);
  await signIn(page, 'modeller');
  const question = 'Does half the drag change the small basin?';
  const experiment = await experimentByScript(page, question);
  const control = await runByScript(page, experiment, { label: 'Control', setup: await firstLook(page) });
  await page.goto(`/runs/${control.id}`);
  await page.getByRole('link', { name: 'New sensitivity run', exact: true }).click();
  await expect(page.getByText('Nothing is changed yet.')).toBeVisible();
  const strength = page.getByRole('spinbutton', { name: /Seasonal strength/ });
  await strength.fill('1.2');
  await expect(page.getByText(/was 1/).first()).toBeVisible();
  await expect(page.getByText(/It would change/)).toContainText(/seasonal strength 1.*→ 1\.20?/i);
  await page.getByRole('button', { name: 'Queue this run' }).click();
  await expect(page).toHaveURL(/\/runs\//);
  await page.goto(`/experiments/${experiment}`);
  const tree = page.getByRole('tree');
  await expect(tree.getByRole('treeitem')).toHaveCount(2);
  await expect(tree).toContainText(/seasonal strength/i);
  await expect(tree.getByText('finished')).toHaveCount(2, { timeout: 60_000 });
  // By keyboard: down to the child, whose panel stands beside the tree; Enter opens the run itself.
  await tree.getByRole('treeitem').first().focus();
  await page.keyboard.press('ArrowDown');
  await expect(page.getByRole('region', { name: /^The run/ })).toContainText('from Control');
  await expectSound(page);
  await tree.getByRole('treeitem').nth(1).focus();
  await page.keyboard.press('Enter');
  await expect(page).toHaveURL(/\/runs\//);
});

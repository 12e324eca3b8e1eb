import { expect, test } from '@playwright/test';
import {
  experimentByScript,
  expectSound,
  firstLook,
  openPlaces,
  pageAs,
  runByScript,
  runsByLabel,
  signIn,
} from './support';

test('an admin caps, pauses, orders and reads what happened', async ({ page, browser }) => {
  await openPlaces(browser);
  test.setTimeout(360_000);
  const modeller = await pageAs(browser, 'modeller');
  const experiment = await experimentByScript(modeller, 'What does the queue do with three runs?');
  await signIn(page, 'admin');
  await page.getByRole('tab', { name: 'Admin' }).click();
  await expect(page.getByRole('heading', { name: 'Queue' })).toBeVisible();
  await expectSound(page);

  // Closed intake: what is queued waits.
  await page.getByRole('switch', { name: 'Intake open' }).click();
  const setup = await firstLook(modeller, (plain) => (plain.length.days = 14600));
  for (const label of ['Queue one', 'Queue two']) await runByScript(modeller, experiment, { label, setup }, 'queued');
  const waiting = page.getByRole('list').filter({ has: page.getByRole('button', { name: /Move Queue one up/ }) });
  await expect(page.getByText('Queue one').first()).toBeVisible();
  await expect(page.getByText('Queue two').first()).toBeVisible();

  // Reordered by keyboard: the second goes first.
  await page.getByRole('button', { name: 'Move Queue two up' }).focus();
  await page.keyboard.press('Enter');
  await expect(waiting.getByRole('listitem').filter({ hasText: /Queue/ }).first()).toContainText('Queue two');

  // Opened: both compute. Lowered with a checkpoint: the youngest goes back at once, with the reason.
  await page.getByRole('switch', { name: 'Intake open' }).click();
  await expect
    .poll(async () => (await runsByLabel(page)).get('Queue one')?.state, { timeout: 120_000 })
    .toBe('running');
  await page.getByRole('link', { name: 'Workers' }).click();
  await expect(page.getByRole('table')).toContainText('Queue two');
  await expectSound(page);
  await page.getByRole('link', { name: 'Queue', exact: true }).click();
  await page.getByRole('spinbutton', { name: 'Runs at once' }).fill('1');
  await page.getByRole('radio', { name: /Save the youngest/ }).check();
  await page.getByRole('button', { name: 'Set the cap' }).click();
  await expect(page.getByText('back in the queue: cap lowered').first()).toBeVisible({ timeout: 20_000 });
  await openPlaces(browser);

  // People, outbox and audit trail.
  await page.getByRole('link', { name: 'People' }).click();
  await expect(page.getByRole('table')).toContainText('modeller@halfdeep.example');
  await expectSound(page);
  await page.getByRole('link', { name: 'Outbox' }).click();
  await expect(page.getByRole('heading', { name: 'Outbox' })).toBeVisible();
  await expectSound(page);
  await page.getByRole('link', { name: 'Audit trail' }).click();
  await expect(page.getByRole('table')).toContainText(/cap|queue/i);
  await expectSound(page);

  for (const label of ['Queue one', 'Queue two'])
    await expect
      .poll(async () => (await runsByLabel(page)).get(label)?.state, { timeout: 120_000, intervals: [1000] })
      .toBe('finished');
  await modeller.context().close();
});

import { expect, test } from '@playwright/test';
import { expectSound, openPlaces, signIn } from './support';

// Issue point 9, first half: the Desk shows the demonstration being computed by the real queue.
test('the desk shows the demonstration happening', async ({ page, browser }) => {
  await signIn(page, 'modeller');
  const running = page.getByRole('article');
  await expect(running).toHaveCount(2);
  await expect(page.getByText('places computing').first()).toBeVisible();
  const clock = running.first().getByText(/^year \d\.\d+ of/);
  const before = await clock.textContent();
  await expect(clock).not.toHaveText(before ?? '', { timeout: 30_000 });
  // Eleven runs, two at once: the others wait.
  const waiting = page.getByRole('list', { name: 'Waiting runs' }).getByRole('listitem');
  await expect.poll(() => waiting.count()).toBeGreaterThan(4);
  await expectSound(page);
  await openPlaces(browser);
  await expect.poll(() => running.count()).toBeGreaterThan(2);
});

import { expect, test } from '@playwright/test';
import { readSlice, runsByLabel, signIn } from './support';

// Issue point 9, second half. Linear runs are affine in the strength of one part of the wind (common practice):
// strong − control = control − weak to round-off; float32 storage leaves about 1e-7 of the largest value.
test('the demonstration ends, and its three runs are affine in the strength of the season', async ({ page }) => {
  test.setTimeout(560_000);
  await signIn(page, 'reviewer');
  const of = (kind: RegExp) => async () =>
    [...(await runsByLabel(page)).values()].filter((run) => kind.test(run.label) && run.state === 'finished').length;
  await expect.poll(of(/^(Nonlinear, .* wind|Family, season)/), { timeout: 500_000, intervals: [3000] }).toBe(7);
  const demo = async () =>
    [...(await runsByLabel(page)).values()].filter((run) =>
      /^(Control|Strong wind, \+20 %|Weak wind, −20 %)$/.test(run.label),
    );
  await expect
    .poll(async () => (await demo()).filter((run) => run.state === 'finished' && run.progress.day === 2555).length, {
      timeout: 500_000,
      intervals: [3000],
    })
    .toBe(3);
  const runs = (await demo()).filter((run) => run.progress.day === 2555);
  const last = async (label: RegExp) => {
    const run = runs.find((item) => label.test(item.label))!;
    return readSlice(page, `/api/runs/${run.id}/frames/latest?variable=eta`);
  };
  const [control, strong, weak] = [await last(/^Control/), await last(/^Strong/), await last(/^Weak/)];
  let worst = 0;
  let largest = 0;
  control.data.forEach((value, k) => {
    if (Number.isNaN(value)) return;
    largest = Math.max(largest, Math.abs(strong.data[k]));
    worst = Math.max(worst, Math.abs(strong.data[k] - value - (value - weak.data[k])));
  });
  expect(largest).toBeGreaterThan(1);
  expect(worst / largest).toBeLessThan(1e-6);
});

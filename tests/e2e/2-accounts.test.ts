import { type Page, expect, test } from '@playwright/test';
import { PASSWORD, addressOf, expectSound, fillSignIn, pageAs, signIn, signOut } from './support';

const NEW_PASSWORD = 'tidal-marmalade-31';

/** Reads the newest mail to an address in the admin's outbox (demonstration on loopback: links are shown) and its link. */
async function linkIn(admin: Page, to: string): Promise<string> {
  await admin.goto('/admin/outbox');
  await admin.getByRole('row').filter({ hasText: to }).first().getByRole('button').click();
  const text = await admin.getByRole('dialog').innerText();
  const link = /https?:\/\/\S+/.exec(text)?.[0];
  expect(link, text).toBeTruthy();
  return link!;
}

test('a wrong password is refused with a sentence, the right one lets in, signing out ends it', async ({ page }) => {
  await page.goto('/');
  await expect(page).toHaveURL(/sign-in/);
  await expectSound(page);
  await fillSignIn(page, addressOf('reviewer'), 'not-the-password-at-all');
  await expect(page.getByRole('alert')).toContainText(/password/i);
  await fillSignIn(page, addressOf('reviewer'), PASSWORD);
  await expect(page.getByRole('heading', { name: 'Desk', level: 1 })).toBeAttached();
  await signOut(page);
  await page.goto('/experiments');
  await expect(page).toHaveURL(/sign-in/);
});

test('a forgotten password is set anew through the mail, and ends other sessions', async ({ page, browser }) => {
  const other = await pageAs(browser, 'reviewer');
  const admin = await pageAs(browser, 'admin');
  await page.goto('/sign-in');
  await page.getByRole('link', { name: 'Forgot the password?' }).click();
  await expect(page.getByRole('heading', { name: 'Forgotten password' })).toBeVisible();
  await expectSound(page);
  await page.getByLabel('E-mail address').fill(addressOf('reviewer'));
  await page.getByRole('button', { name: 'Send the link' }).click();
  await expect(page.getByRole('status')).toContainText('on its way');
  await page.goto(await linkIn(admin, addressOf('reviewer')));
  await page.getByLabel('New password').fill('short');
  await page.getByRole('button', { name: 'Set the password' }).click();
  await expect(page.getByText(/at least 12 characters/)).toBeVisible();
  await page.getByLabel('New password').fill(NEW_PASSWORD);
  await page.getByRole('button', { name: 'Set the password' }).click();
  await page.getByRole('link', { name: 'Sign in with it' }).click();
  await fillSignIn(page, addressOf('reviewer'), NEW_PASSWORD);
  await expect(page.getByRole('heading', { name: 'Desk', level: 1 })).toBeAttached();
  await other.goto('/experiments');
  await expect(other).toHaveURL(/sign-in/);
  // Back to the password of the other tests, by the same way.
  await signOut(page);
  await page.goto('/reset');
  await page.getByLabel('E-mail address').fill(addressOf('reviewer'));
  await page.getByRole('button', { name: 'Send the link' }).click();
  await expect(page.getByRole('status')).toContainText('on its way');
  await page.goto(await linkIn(admin, addressOf('reviewer')));
  await page.getByLabel('New password').fill(PASSWORD);
  await page.getByRole('button', { name: 'Set the password' }).click();
  await expect(page.getByText('The new password holds.')).toBeVisible();
  await signIn(page, 'reviewer');
  await other.context().close();
  await admin.context().close();
});

test('an invited person accepts, has the role that was given, and is put out when deactivated', async ({
  page,
  browser,
}) => {
  const admin = await pageAs(browser, 'admin');
  await admin.goto('/admin/people');
  await admin.getByRole('button', { name: 'Invite a person' }).click();
  const dialog = admin.getByRole('dialog');
  await dialog.getByLabel('Name').fill('Second reviewer');
  await dialog.getByLabel('E-mail address').fill('second-reviewer@halfdeep.example');
  await dialog.getByRole('checkbox', { name: /reviewer/i }).check();
  await dialog.getByRole('checkbox', { name: /modeller/i }).uncheck();
  await dialog.getByRole('button', { name: /invit/i }).click();
  await expect(admin.getByRole('row').filter({ hasText: 'second-reviewer@' })).toContainText('invited');
  await page.goto(await linkIn(admin, 'second-reviewer@halfdeep.example'));
  await expect(page.getByText(/invites you as reviewer/)).toBeVisible();
  await expectSound(page);
  await page.getByLabel('Password').fill(NEW_PASSWORD);
  await page.getByRole('button', { name: 'Accept and sign in' }).click();
  await expect(page.getByRole('heading', { name: 'Desk', level: 1 })).toBeAttached();
  // A reviewer has no admin's pages, and cannot begin an experiment.
  await expect(page.getByRole('tab', { name: 'Admin' })).toHaveCount(0);
  await page.goto('/admin/people');
  await expect(page.getByText(/admin/i).first()).toBeVisible();
  await expect(page.getByRole('button', { name: 'Invite a person' })).toHaveCount(0);
  await page.goto('/experiments');
  await expect(page.getByRole('button', { name: 'New experiment' })).toHaveCount(0);
  // Deactivated: the open session ends at once.
  await admin.goto('/admin/people');
  await admin.getByRole('button', { name: 'Deactivate Second reviewer' }).click();
  await admin
    .getByRole('dialog')
    .getByRole('button', { name: /Deactivate/ })
    .click();
  await expect(admin.getByRole('row').filter({ hasText: 'second-reviewer@' })).toContainText('deactivated');
  await page.goto('/experiments');
  await expect(page).toHaveURL(/sign-in/);
  await admin.goto('/admin/audit');
  await expect(admin.getByRole('table')).toContainText('Second reviewer');
  await admin.context().close();
});

// Makes the pictures of the README's tour from a running product whose demonstration has finished:
//   npm run tour -- http://localhost:4300 PASSWORD
// A name behind that makes just this picture: `desk` is best taken while the demonstration still computes.
import { join } from 'node:path';
import { mkdirSync } from 'node:fs';
import { chromium } from 'playwright';
import { findChromium } from './chromium.mjs';
import { root } from './run.mjs';

const [base, password, only] = process.argv.slice(2);
if (!password) {
  console.error(
    'Say where the product runs and the demonstration’s password: npm run tour -- ADDRESS PASSWORD [PICTURE]',
  );
  process.exit(2);
}
const folder = join(root, 'data', 'tour');
mkdirSync(folder, { recursive: true });
const browser = await chromium.launch({
  executablePath: findChromium(),
  args: ['--no-sandbox', '--disable-gpu', '--disable-background-networking'],
});

async function pageOf(role, ground) {
  const context = await browser.newContext({
    viewport: { width: 1440, height: 900 },
    locale: 'en-GB',
    timezoneId: 'UTC',
  });
  await context.addInitScript((name) => localStorage.setItem('halfdeep.ground', name), ground);
  const email = `${role}@halfdeep.example`;
  const answer = await context.request.post(`${base}/api/session`, {
    data: { email, password },
    headers: { origin: base },
  });
  if (!answer.ok()) throw new Error(`${email} could not sign in: ${await answer.text()}`);
  return context.newPage();
}

async function picture(page, path, name, settle = async () => {}) {
  if (only && only !== name) return;
  await page.goto(base + path);
  await page.waitForLoadState('networkidle').catch((error) => {
    // The event stream of a live page never ends.
    if (error.name !== 'TimeoutError') throw error;
  });
  await settle(page);
  await page.waitForTimeout(1500);
  await page.screenshot({ path: join(folder, `${name}.png`) });
  console.log(`data/tour/${name}.png`);
}

const modeller = await pageOf('modeller', 'paper');
const runs = (await (await modeller.request.get(`${base}/api/runs?pageSize=100`)).json()).items;
const labelled = (start) => runs.find((run) => run.label.startsWith(start));
const [control, strong] = [labelled('Control'), labelled('Strong')];
const drawn = (page) => page.locator('.heatmaplayer').first().waitFor({ timeout: 60_000 });
await picture(modeller, '/', 'desk');
await picture(modeller, `/experiments/${control.experimentId}/setup?from=${control.id}`, 'setup');
await picture(modeller, `/experiments/${control.experimentId}`, 'experiment');
await picture(await pageOf('modeller', 'ink'), `/runs/${control.id}`, 'run', drawn);
await picture(await pageOf('reviewer', 'paper'), `/side-by-side?a=${control.id}&b=${strong.id}`, 'side-by-side', drawn);
await picture(await pageOf('admin', 'paper'), '/admin/queue', 'admin');
await browser.close();

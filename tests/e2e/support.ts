import AxeBuilder from '@axe-core/playwright';
import { type APIRequestContext, type Browser, type Page, expect } from '@playwright/test';

export const PASSWORD = 'brackish-lantern-27';
export type DemoRole = 'modeller' | 'reviewer' | 'admin';
export const addressOf = (role: DemoRole): string => `${role}@halfdeep.example`;

/** Types address and password into the sign-in form, as a person does. */
export async function fillSignIn(page: Page, email: string, password: string): Promise<void> {
  await page.getByLabel('E-mail address').fill(email);
  await page.getByLabel('Password').fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
}

/** Signs in through the form and waits for the desk. */
export async function signIn(page: Page, role: DemoRole): Promise<void> {
  await page.goto('/sign-in');
  await fillSignIn(page, addressOf(role), PASSWORD);
  await expect(page.getByRole('heading', { name: 'Desk', level: 1 })).toBeAttached();
}

export async function signOut(page: Page): Promise<void> {
  await page.getByRole('button', { name: /^Account of/ }).click();
  await page.getByRole('menuitem', { name: 'Sign out' }).click();
  await expect(page.getByRole('heading', { name: 'Sign in' })).toBeVisible();
}

/** A page of its own, signed in as the role. Close it with `page.context().close()`. */
export async function pageAs(browser: Browser, role: DemoRole): Promise<Page> {
  const context = await browser.newContext();
  const page = await context.newPage();
  await signIn(page, role);
  return page;
}

/** WCAG 2.2 AA as far as a machine can tell: no violation on the page as it stands. */
export async function expectAccessible(page: Page): Promise<void> {
  const found = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22aa'])
    .analyze();
  const told = found.violations.map(
    (violation) =>
      `${violation.id}: ${violation.help} (${violation.nodes.map((node) => node.target.join(' ')).join('; ')})`,
  );
  expect(told).toEqual([]);
}

/** The screen as a whole, in both grounds and at the three widths, without a violation or a sideways scroll. */
export async function expectSound(page: Page): Promise<void> {
  for (const ground of ['paper', 'ink'] as const) {
    await page.evaluate((name) => {
      document.documentElement.dataset['theme'] = name;
    }, ground);
    await expectAccessible(page);
  }
  await page.evaluate(() => delete document.documentElement.dataset['theme']);
  for (const width of [390, 1024, 1440]) {
    await page.setViewportSize({ width, height: 900 });
    await expect
      .poll(() => page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth), {
        message: `sideways scroll at ${width} px`,
        timeout: 10_000,
      })
      .toBeLessThanOrEqual(0);
  }
}

interface RunAnswer {
  id: string;
  experimentId: string;
  label: string;
  state: string;
  fingerprint: { sha256: string } | null;
  progress: { day: number; step: number; records: { frames: number } };
}

/** Requests that the page's session makes: what a script of this person would do. */
export function api(page: Page): APIRequestContext {
  return page.context().request;
}

const json = async <T>(answer: Promise<{ ok(): boolean; text(): Promise<string> }>): Promise<T> => {
  const arrived = await answer;
  const text = await arrived.text();
  expect(arrived.ok(), text).toBe(true);
  return JSON.parse(text) as T;
};

function headers(page: Page): Record<string, string> {
  return { origin: new URL(page.url()).origin };
}

export async function readRun(page: Page, id: string): Promise<RunAnswer> {
  return json(api(page).get(`/api/runs/${id}`));
}

export async function runsByLabel(page: Page): Promise<Map<string, RunAnswer>> {
  const found = await json<{ items: RunAnswer[] }>(api(page).get('/api/runs?pageSize=100'));
  return new Map(found.items.map((run) => [run.label, run]));
}

/** Lets more runs compute at once than the demonstration takes, so that the tests' own runs start without waiting. */
export async function openPlaces(browser: Browser): Promise<void> {
  const page = await pageAs(browser, 'admin');
  const queue = await json<{ maxCap: number }>(api(page).get('/api/admin/queue'));
  await json(api(page).patch('/api/admin/queue', { data: { cap: queue.maxCap }, headers: headers(page) }));
  await page.context().close();
}

interface PlainSetup {
  length: { days: number };
  wind: { seasonalStrength: number };
  numerics: { spacingLongitudeDeg: number; spacingLatitudeDeg: number };
}

/** The small ready setup, changed as the test wants. */
export async function firstLook(
  page: Page,
  change: (setup: PlainSetup) => void = () => undefined,
): Promise<PlainSetup> {
  const answer = await json<{ id: string; setup: PlainSetup }[] | { items: { id: string; setup: PlainSetup }[] }>(
    api(page).get('/api/presets'),
  );
  const presets = Array.isArray(answer) ? answer : answer.items;
  const setup = presets.find((preset) => preset.id === 'first-look')!.setup;
  change(setup);
  return setup;
}

/** An experiment by script, for tests whose subject comes after it. */
export async function experimentByScript(page: Page, question: string): Promise<string> {
  const made = await json<{ id: string }>(
    api(page).post('/api/experiments', { data: { question, notes: '' }, headers: headers(page) }),
  );
  return made.id;
}

/** Queues a run by script and answers it when it has reached `state`. */
export async function runByScript(
  page: Page,
  experimentId: string,
  run: { label: string; setup: PlainSetup; parentRunId?: string },
  state = 'finished',
): Promise<RunAnswer> {
  const queued = await json<RunAnswer>(
    api(page).post(`/api/experiments/${experimentId}/runs`, { data: run, headers: headers(page) }),
  );
  await expect
    .poll(async () => (await readRun(page, queued.id)).state, { timeout: 90_000, intervals: [500] })
    .toBe(state);
  return readRun(page, queued.id);
}

/** A binary slice: its head and its numbers. */
export async function readSlice(
  page: Page,
  path: string,
): Promise<{ head: Record<string, unknown>; data: Float32Array }> {
  const answer = await api(page).get(path);
  expect(answer.ok()).toBe(true);
  const body = await answer.body();
  const length = body.readUInt32LE(0);
  const head = JSON.parse(body.subarray(4, 4 + length).toString('utf8')) as Record<string, unknown>;
  const bytes = body.subarray(4 + length);
  const copy = bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength);
  return { head, data: new Float32Array(copy) };
}

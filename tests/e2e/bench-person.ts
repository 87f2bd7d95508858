/** What every journey needs: a signed-in person, and the checks that hold on every page. */
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import type { Locator, Page } from '@playwright/test';
import { expect } from '@playwright/test';
import { flawsInSight } from '@/tests/e2e/flaws-in-sight';

const require = createRequire(import.meta.url);
const axeSource = readFileSync(require.resolve('axe-core/axe.min.js'), 'utf8');

export type Who = 'admin' | 'engineer' | 'reviewer';
export type Door = { url: string; password: string };

/** The hub that all journeys share. */
export function sharedHub(): Door {
  const url = process.env.TURNMARK_E2E_URL;
  const password = process.env.TURNMARK_E2E_PASSWORD;
  if (url === undefined || password === undefined) throw new Error('the hub of the journeys is not running');
  return { url, password };
}

export async function signIn(page: Page, who: Who = 'engineer', hub = sharedHub()): Promise<void> {
  await page.goto(`${hub.url}/sign-in`);
  await fillSignIn(page, who, hub);
  await page.waitForURL(/\/rigs$/);
}

export async function fillSignIn(page: Page, who: Who, { password }: Door): Promise<void> {
  await page.getByLabel('Email').fill(`${who}@turnmark.example`);
  await page.getByLabel('Password', { exact: true }).fill(password);
  await page.getByRole('button', { name: 'Sign in' }).click();
}

/** Opens Watch of a rig; a first visit in this browser has a caution to read. */
export async function openWatch(page: Page, rigId: string): Promise<void> {
  await page.goto(`${sharedHub().url}/rigs/${rigId}`);
  const caution = page.getByRole('dialog', { name: 'Before you watch a rig' });
  await caution.getByRole('button', { name: 'I have read it' }).click();
  await expect(caution).toBeHidden();
}

type AxeResult = { violations: { id: string; help: string; nodes: { html: string }[] }[] };
const schemes = { light: 'steel', dark: 'dye' } as const;

/**
 * In both schemes: no accessibility violation that axe-core can find, and nothing wider than the page. The schemes
 * differ in colours only, so the second is looked through for contrast. On the app's own pages what can be pressed is large
 * enough, and words and drawings have their room.
 */
export async function expectSound(page: Page): Promise<void> {
  if (!(await page.evaluate(() => 'axe' in window))) await page.evaluate(axeSource);
  await expectSoundIn(page, 'light', {});
  await expectSoundIn(page, 'dark', { runOnly: ['color-contrast'] });
  const overflow = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  );
  expect(overflow, `px that ${page.url()} is too wide`).toBeLessThanOrEqual(0);
  const marked = await page.evaluate(() => 'scheme' in document.documentElement.dataset);
  if (marked) expect(await page.evaluate(flawsInSight), `what does not fit on ${page.url()}`).toEqual([]);
}

async function expectSoundIn(page: Page, colorScheme: keyof typeof schemes, options: object): Promise<void> {
  await page.emulateMedia({ colorScheme });
  // Pages that the hub serves itself follow the system without a mark of their own.
  await page.waitForFunction(
    (scheme) => (document.documentElement.dataset['scheme'] ?? scheme) === scheme,
    schemes[colorScheme],
  );
  const { violations } = await page.evaluate(
    (asked) =>
      (window as unknown as { axe: { run(options: object): Promise<unknown> } }).axe.run({
        resultTypes: ['violations'],
        ...asked,
      }) as Promise<AxeResult>,
    options,
  );
  const found = violations.flatMap((v) => v.nodes.map((n) => `${v.id}: ${v.help}: ${n.html}`));
  expect(found, `accessibility of ${page.url()}, ${colorScheme}`).toEqual([]);
}

/** The number that stands first in a text: "612.4 rpm" is 612.4; NaN where there is none. */
export function firstNumber(text: string | null): number {
  return Number.parseFloat(/[\u2212-]?\d+(\.\d+)?/.exec(text ?? '')?.[0].replace('\u2212', '-') ?? 'NaN');
}

/** A number that is read again and again until it is there. */
export async function numberIn(place: Locator): Promise<number> {
  await expect.poll(async () => firstNumber(await place.textContent())).not.toBeNaN();
  return firstNumber(await place.textContent());
}

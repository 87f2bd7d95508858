/** What every journey needs: a signed-in person, the checks that hold on every page, and a look at it. */
import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import type { Page } from '@playwright/test';
import { expect } from '@playwright/test';

const require = createRequire(import.meta.url);
const axeSource = readFileSync(require.resolve('axe-core/axe.min.js'), 'utf8');

export function hubUrl(): string {
  const url = process.env.TURNMARK_E2E_URL;
  if (url === undefined) throw new Error('the hub of the journeys is not running');
  return url;
}

export async function signIn(page: Page, who: 'admin' | 'engineer' | 'reviewer' = 'engineer'): Promise<void> {
  await page.goto(`${hubUrl()}/sign-in`);
  await page.getByLabel('Email').fill(`${who}@turnmark.example`);
  await page.getByLabel('Password', { exact: true }).fill(process.env.TURNMARK_E2E_PASSWORD ?? '');
  await page.getByRole('button', { name: 'Sign in' }).click();
  await page.waitForURL(/\/rigs$/);
}

/** The API as a script uses it, with a token of its own. */
export async function api(who: 'admin' | 'engineer' | 'reviewer' = 'engineer') {
  const answer = await fetch(`${hubUrl()}/api/v1/session`, {
    method: 'POST',
    headers: { 'content-type': 'application/json' },
    body: JSON.stringify({ email: `${who}@turnmark.example`, password: process.env.TURNMARK_E2E_PASSWORD }),
  });
  const { accessToken } = (await answer.json()) as { accessToken: string };
  return async <T>(method: string, path: string, body?: unknown): Promise<T> => {
    const response = await fetch(`${hubUrl()}/api/v1${path}`, {
      method,
      headers: { authorization: `Bearer ${accessToken}`, 'content-type': 'application/json' },
      ...(body === undefined ? {} : { body: JSON.stringify(body) }),
    });
    if (!response.ok) throw new Error(`${method} ${path}: ${response.status} ${await response.text()}`);
    return (response.status === 204 ? undefined : await response.json()) as T;
  };
}

type AxeResult = { violations: { id: string; help: string; nodes: { html: string }[] }[] };

/** No accessibility violation that axe-core can find, and nothing wider than the page. */
export async function expectSound(page: Page): Promise<void> {
  await page.evaluate(axeSource);
  const result = await page.evaluate(
    () => (window as unknown as { axe: { run(): Promise<unknown> } }).axe.run() as Promise<AxeResult>,
  );
  expect(result.violations.map((v) => `${v.id}: ${v.help}: ${v.nodes.map((n) => n.html).join(' ')}`)).toEqual(
    [],
  );
  const overflow = await page.evaluate(
    () => document.documentElement.scrollWidth - document.documentElement.clientWidth,
  );
  expect(overflow).toBeLessThanOrEqual(0);
}

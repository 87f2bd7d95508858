/** Every screen in both schemes, with the longest name that a rig can have; and the way in and back. */
import type { Page } from '@playwright/test';
import { expect, test } from '@playwright/test';
import { expectSound, fillSignIn, sharedHub, signIn } from '@/tests/e2e/bench-person';
import { block, post } from '@/tests/e2e/board';
import { api, keepLast, makeRig } from '@/tests/e2e/lab';

const goTo = (page: Page, path: string) => page.goto(`${sharedHub().url}${path}`);

test('every screen is sound', async ({ page }) => {
  const call = await api();
  const longName = 'Haulingwinchdrumwithoutasinglegapinitsname'.repeat(2).slice(0, 80);
  const { rig, key } = await makeRig(call, longName);
  await post(
    key,
    Array.from({ length: 10 }, (_, seq) => block('bench-1', seq)),
  );
  const capture = await keepLast(call, rig.id, 1, 'Kept'.padEnd(120, 'withoutagap'));

  await goTo(page, '/sign-in');
  await expect(page.getByRole('heading', { name: 'Turnmark' })).toBeVisible();
  await expectSound(page);
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByText('Enter your password.')).toBeVisible();
  await expectSound(page);
  await signIn(page);

  const screens: [path: string, heading: string | RegExp][] = [
    ['/rigs', 'Rigs'],
    ['/rigs/new', 'New rig'],
    [`/rigs/${rig.id}/setup`, longName],
    [`/rigs/${rig.id}/connect`, longName],
    [`/rigs/${rig.id}`, longName],
    ['/shelf', 'Shelf'],
    [`/shelf/${capture.id}`, capture.title],
    ['/inbox', 'Inbox'],
    ['/more', 'More'],
    ['/account', 'Account'],
    ['/no/such/page', 'There is no such page'],
    ['/rigs/no-such-rig', 'There is nothing here'],
    ['/shelf/no-such-capture', 'There is nothing here'],
    ['/api/docs', /Turnmark/],
  ];
  for (const [path, heading] of screens) {
    await test.step(path, async () => {
      await goTo(page, path);
      await expect(page.getByRole('heading', { name: heading }).first()).toBeVisible();
      const caution = page.getByRole('button', { name: 'I have read it' });
      if (path === `/rigs/${rig.id}`) await caution.click();
      await expect(page.getByRole('progressbar')).toHaveCount(0);
      await expectSound(page);
    });
  }
  await call('DELETE', `/captures/${capture.id}`);
});

test('who is not signed in is sent to sign in, and back to the place', async ({ page }) => {
  await goTo(page, '/shelf?q=bracket');
  await page.waitForURL(/\/sign-in\?to=/);
  await page.getByLabel('Email').fill('engineer@turnmark.example');
  await page.getByLabel('Password', { exact: true }).fill('not the password');
  await page.getByRole('button', { name: 'Sign in' }).click();
  await expect(page.getByRole('alert')).toBeVisible();
  await expectSound(page);
  await fillSignIn(page, 'engineer', sharedHub());
  await page.waitForURL(/\/shelf\?q=bracket$/);
  await expect(page.getByLabel('Search titles, tags and notes')).toHaveValue('bracket');

  await goTo(page, '/account');
  await page.getByRole('button', { name: 'Sign out', exact: true }).click();
  await page.waitForURL(/\/sign-in$/);
  await goTo(page, '/rigs');
  await page.waitForURL(/\/sign-in\?to=/);
});

test('the scheme that is chosen on Watch stays, whatever the system wants', async ({ page }) => {
  const scheme = () => page.evaluate(() => document.documentElement.dataset['scheme']);
  const call = await api();
  const { rig } = await makeRig(call, `Sunlight, ${test.info().project.name}`);
  await page.emulateMedia({ colorScheme: 'dark' });
  await signIn(page);
  await expect.poll(scheme).toBe('dye');
  await goTo(page, `/rigs/${rig.id}`);
  await page.getByRole('button', { name: 'I have read it' }).click();
  await page.getByRole('button', { name: 'Light scheme' }).click();
  await expect.poll(scheme).toBe('steel');
  await page.reload();
  await expect(page.getByRole('button', { name: 'Dark scheme' })).toBeVisible();
  await goTo(page, '/account');
  await page.getByRole('radio', { name: 'As the system' }).click();
  await expect.poll(scheme).toBe('dye');
});

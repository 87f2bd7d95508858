/** Journey 5: one press keeps the last seconds; words make them found again; undo takes them away. */
import { expect, test } from '@playwright/test';
import { expectSound, openWatch, sharedHub, signIn } from '@/tests/e2e/bench-person';
import { api, demoRig } from '@/tests/e2e/lab';
import type { Capture } from '@/server/contract';

test('keep, tag, and find it again on the Shelf', async ({ page }, { project }) => {
  const call = await api();
  const rig = await demoRig(call, 'Line hauler');
  const tag = `bracket-${project.name}`;
  const title = `Bracket breathes, ${project.name}`;
  await signIn(page);
  await openWatch(page, rig.id);
  const keep = page.getByRole('region', { name: 'Keep' });
  await keep.getByLabel(/^Seconds to keep/).selectOption('5 s');
  await keep.getByRole('button', { name: 'Keep the last 5 s' }).click();

  const sheet = page.getByRole('dialog', { name: /^Kept: / });
  await sheet.getByLabel('Title').fill(title);
  await sheet.getByLabel(/^Tags/).fill(tag);
  await sheet.getByRole('button', { name: 'Add tag', exact: true }).click();
  await expect(sheet.getByRole('button', { name: `Take off tag ${tag}` })).toBeVisible();
  await sheet.getByLabel(/^Note/).fill('Gap 1.25 mm by feeler gauge, pump running, zephyrwort line.');
  await expectSound(page);
  await sheet.getByRole('button', { name: 'Save' }).click();
  await expect(page.getByText(`"${title}" is on the Shelf.`)).toBeVisible();
  await expectSound(page);

  await page.getByRole('link', { name: 'Shelf' }).click();
  const found = page.getByRole('link', { name: title });
  await expect(found).toBeVisible();
  await expectSound(page);
  const filter = page.getByRole('button', { name: 'Filter', exact: true });
  if (await filter.isVisible()) await filter.click();
  await page.getByLabel('Tag', { exact: true }).selectOption(tag);
  await page.waitForURL(/tag=bracket/);
  await expect(page.getByRole('link', { name: /Bracket breathes/ })).toHaveCount(1);
  await expectSound(page);
  await page.getByRole('button', { name: 'Clear the filter' }).click();

  const search = page.getByLabel('Search titles, tags and notes');
  await search.fill('zephyrwort');
  await page.waitForURL(/q=zephyrwort/);
  await expect(found).toBeVisible();
  await search.fill('nothing has this word');
  await expect(page.getByRole('heading', { name: 'Nothing fits' })).toBeVisible();
  await expectSound(page);
  await search.fill('zephyrwort');
  await found.click();
  await expect(page.getByRole('heading', { level: 1, name: title })).toBeVisible();
  await expect(page.getByRole('region', { name: 'Tags and note' })).toContainText('feeler gauge');
});

test('undo deletes what was just kept', async ({ page }) => {
  const call = await api();
  const rig = await demoRig(call, 'Line hauler');
  await signIn(page);
  await openWatch(page, rig.id);
  const answer = page.waitForResponse(
    (r) => r.request().method() === 'POST' && r.url().endsWith('/captures'),
  );
  await page.getByRole('button', { name: /^Keep the last/ }).click();
  const { id } = (await (await answer).json()) as Capture;
  await expect(call<Capture>('GET', `/captures/${id}`)).resolves.toMatchObject({ id });
  await page.getByRole('button', { name: 'Undo: delete this capture' }).click();
  await expect(page.getByText('The capture is deleted.')).toBeVisible();
  await expect(page.getByRole('dialog')).toHaveCount(0);
  await expect(call('GET', `/captures/${id}`)).rejects.toThrow(/404/);
});

test('a reviewer watches and has nothing to press that changes a rig', async ({ page }) => {
  const call = await api();
  const rig = await demoRig(call, 'Rinse pump');
  await signIn(page, 'reviewer');
  await expect(page.getByRole('button', { name: 'New rig' })).toHaveCount(0);
  await openWatch(page, rig.id);
  await expect(
    page.getByRole('region', { name: 'Signal' }).getByRole('img', { name: /^Signal over/ }),
  ).toBeVisible();
  await expect(page.getByRole('button', { name: /^Keep/ })).toHaveCount(0);
  await expect(page.getByRole('region', { name: 'Keep' })).toHaveCount(0);
  await expectSound(page);
  for (const path of ['/rigs/new', `/rigs/${rig.id}/setup`, `/rigs/${rig.id}/connect`]) {
    await page.goto(`${sharedHub().url}${path}`);
    await expect(page.getByRole('heading', { name: 'Not open to your role' })).toBeVisible();
    await expectSound(page);
  }
});

/** What an eye sees at once and no label tells: what stands level, what has its unit, what is said once. */
import { expect, test } from '@playwright/test';
import type { Locator } from '@playwright/test';
import { expectSound, openWatch, sharedHub, signIn } from '@/tests/e2e/bench-person';
import { api, demoRig, keepLast } from '@/tests/e2e/lab';
import type { Capture, Live } from '@/server/contract';

const boxOf = async (place: Locator) => {
  const box = await place.boundingBox();
  if (!box) throw new Error('it is not in sight');
  return box;
};

test('controls side by side stand level, also where one has an error below it', async ({ page }) => {
  await signIn(page);
  await page.goto(`${sharedHub().url}/rigs/new`);
  const steps = page.getByRole('list', { name: 'Steps' });
  await expect(page.getByRole('heading', { name: 'New rig' })).toBeVisible();
  await page.getByLabel('Name of the rig').fill('Level');
  if (await steps.isVisible()) await page.getByRole('button', { name: 'Next' }).click();
  const level = async () => {
    const pulses = await boxOf(page.getByLabel('Pulses per turn'));
    const missing = await boxOf(page.getByLabel('Missing'));
    expect(pulses.x).toBeLessThan(missing.x);
    expect(Math.abs(pulses.y - missing.y)).toBeLessThanOrEqual(1);
  };
  await level();
  await page.getByRole('button', { name: /^(Next|Make the rig)$/ }).click();
  await expect(page.getByText('Enter a number.').first()).toBeVisible();
  await level();
  await expectSound(page);
});

test('a setup says once what holds for several sensors, and all that follows in a line each', async ({
  page,
}) => {
  const call = await api();
  const rig = await call<{ id: string }>('POST', '/rigs', {
    name: `Ring of poles, ${test.info().project.name}`,
    sensing: 'three-hall',
    wheel: { pulsesPerTurn: 8 },
    channels: ['U', 'V', 'W'].map((name) => ({
      name,
      role: name,
      maxInputV: 5,
      sensor: { kind: 'latch', activeLow: true, supplyV: 5 },
    })),
    ratedRpm: 400,
  });
  await signIn(page);
  await page.goto(`${sharedHub().url}/rigs/${rig.id}/setup`);
  const speed = page.getByRole('button', { name: 'Step 4: Speed' });
  await expect(page.getByLabel('Name of the rig')).toBeVisible();
  if (await speed.isVisible()) await speed.click();
  await page.getByLabel('Samples a second').fill('20000');
  await expect(page.getByText('Pole-pair frequency')).toBeVisible();
  await expect(page.getByText(/is a latch/)).toHaveCount(1);
  await expect(page.getByText(/The same holds for V and W\./)).toBeVisible();
  const names = page.locator('dt');
  const lines = await names.evaluateAll((list) => list.map((name) => name.getBoundingClientRect().height));
  expect(lines.length).toBeGreaterThan(4);
  expect(Math.max(...lines), 'a name in two lines').toBeLessThan(30);
  await expectSound(page);
});

test('every lane names its unit, and one axis has one unit', async ({ page }) => {
  const call = await api();
  const rig = await demoRig(call, 'Line hauler');
  await expect
    .poll(async () => (await call<Live>('GET', `/rigs/${rig.id}/live`)).lookbackS)
    .toBeGreaterThan(3);
  const capture: Capture = await keepLast(call, rig.id, 3, `Units, ${test.info().project.name}`);
  await signIn(page);
  await openWatch(page, rig.id);
  const live = page.getByRole('region', { name: 'Signal' });
  await expect(live.getByText('volts', { exact: true })).toBeVisible();
  if (test.info().project.name === 'wide') {
    const plate = page.getByRole('region', { name: 'Findings' }).locator('> *').nth(1);
    await expect(plate).toBeVisible();
    expect(Math.abs((await boxOf(plate)).y - (await boxOf(live)).y)).toBeLessThanOrEqual(1);
  }
  await page.goto(`${sharedHub().url}/shelf/${capture.id}`);
  const kept = page.getByRole('region', { name: 'Signal' });
  await expect(kept.getByText('volts', { exact: true })).toBeVisible();
  await expect(kept.getByText('rpm', { exact: true })).toBeVisible();
  await expect(page.getByRole('region', { name: 'Measured' })).toBeVisible();
  const words = await kept.locator('svg text').allTextContents();
  expect(words.filter((word) => /\d s$/.test(word)).length).toBeGreaterThan(0);
  expect(words.filter((word) => /ms$/.test(word))).toEqual([]);
  await expect(page.getByText('angle unknown')).toHaveCount(0);
  await expectSound(page);
  await call('DELETE', `/captures/${capture.id}`);
});

test('the picture gives room back when the window gets lower', async ({ page }) => {
  const rig = await demoRig(await api(), 'Line hauler');
  await signIn(page);
  await openWatch(page, rig.id);
  const keep = page.getByRole('button', { name: /^Keep the last/ });
  await expect(page.getByRole('img', { name: /^Signal over/ })).toBeVisible();
  await page.setViewportSize({ width: 1440, height: 900 });
  await expect(page.getByRole('navigation', { name: 'Main' })).toBeVisible();
  await page.setViewportSize({ width: 1440, height: 700 });
  await expect.poll(async () => (await boxOf(keep)).y + (await boxOf(keep)).height).toBeLessThanOrEqual(700);
});

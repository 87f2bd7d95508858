/** Journey 2: how fast, which way, is it healthy; and nothing that looks live when it is not. */
import type { Page } from '@playwright/test';
import { expect, test } from '@playwright/test';
import { expectSound, firstNumber, numberIn, openWatch, signIn } from '@/tests/e2e/bench-person';
import { boardRpm, cutOffSwingV, stream } from '@/tests/e2e/board';
import { api, demoRig, makeRig } from '@/tests/e2e/lab';
import type { Live } from '@/server/contract';

const speedOf = (page: Page) => page.getByRole('region', { name: 'Speed' });
const farButton = (page: Page) => speedOf(page).getByRole('button', { name: /Far view$/ });
const pictureOf = (page: Page) => page.getByRole('region', { name: 'Signal' });

test('speed and picture of a rig that runs', async ({ page }) => {
  const call = await api();
  const rig = await demoRig(call, 'Line hauler');
  await signIn(page);
  await page.goto(page.url().replace(/rigs$/, `rigs/${rig.id}`));
  const caution = page.getByRole('dialog', { name: 'Before you watch a rig' });
  await expect(caution).toContainText('It is no safety function');
  await expectSound(page);
  await caution.getByRole('button', { name: 'I have read it' }).click();
  await page.reload();
  await expect(caution).toBeHidden();

  // The demo stands still for some seconds of each loop.
  await expect(farButton(page)).toHaveText(/^\d+(\.\d+)?rpmFar view$/, { timeout: 40_000 });
  await expect(speedOf(page)).toContainText('direction not sensed');
  await expect(speedOf(page)).toContainText(/no findings|\d findings?/);
  await expect(speedOf(page)).toContainText(/±.*over the last turn · 58\steeth\sa\sturn/);

  const picture = pictureOf(page).getByRole('img', { name: /^Signal over .* channel A from/ });
  await expect(picture).toHaveAttribute('aria-label', /[5-9] teeth counted/);
  await expect(picture.getByText('teeth', { exact: true })).toBeVisible();
  await expect(picture.getByText('A', { exact: true })).toBeVisible();
  await expectSound(page);
});

test('a pair of sensors says which way', async ({ page }) => {
  const call = await api();
  const rig = await demoRig(call, 'Spool guide');
  await signIn(page);
  await openWatch(page, rig.id);
  // Its guide runs to and fro, and its speed is told anew with each tooth.
  await expect(speedOf(page)).toHaveText(/^(forward|reverse).*rpm/, { timeout: 40_000 });
  const before = await numberIn(farButton(page));
  await expect.poll(async () => firstNumber(await farButton(page).textContent())).not.toBe(before);
  const picture = pictureOf(page).getByRole('img', { name: /channels A from .* volts, B from .* volts/ });
  await expect(picture.getByText('B', { exact: true })).toBeVisible();
  await expect(page.getByRole('img', { name: /^Wheel with 24 teeth/ })).toBeVisible();
  await expectSound(page);
});

test('far view, hold, and how much of the signal is shown', async ({ page }) => {
  const call = await api();
  const rig = await demoRig(call, 'Spool guide');
  await signIn(page);
  await openWatch(page, rig.id);
  await expect(pictureOf(page).getByRole('img', { name: /teeth? counted/ })).toBeVisible();

  await farButton(page).click();
  const far = page.getByRole('dialog', { name: 'Far view of Spool guide' });
  await expect(far).toContainText(/rpm|stopped|unknown|silent/);
  await expect(far).toContainText(/healthy|note|check|grave|unknown/);
  await expectSound(page);
  await far.getByRole('button', { name: 'Close far view' }).click();
  await expect(far).toBeHidden();

  const shorter = page.getByRole('button', { name: 'shorter than 7 teeth' });
  await shorter.click();
  await expect(page.getByRole('button', { name: '4 teeth: change to time' })).toBeVisible();
  await page.getByRole('button', { name: 'longer than 4 teeth' }).click();
  await page.getByRole('button', { name: 'longer than 7 teeth' }).click();
  await page.getByRole('button', { name: '12 teeth: change to time' }).click();
  await expect(page.getByRole('button', { name: / m?s: change to teeth$/ })).toBeVisible();
  await page.getByRole('button', { name: 'on the tooth: change' }).click();
  await expect(page.getByRole('button', { name: 'free-running: change' })).toBeVisible();

  await page.getByRole('button', { name: 'Hold the picture' }).click();
  await expect(pictureOf(page)).toContainText(/held at \d{1,2}:\d\d:\d\d/);
  const held = await pictureOf(page).textContent();
  const speed = await farButton(page).textContent();
  // The speed goes on while the picture stands.
  await expect(farButton(page)).not.toHaveText(speed ?? '');
  expect(await pictureOf(page).textContent()).toBe(held);
  await expectSound(page);
  await page.getByRole('button', { name: 'Release the picture' }).click();
  await expect(pictureOf(page)).not.toContainText('held at');

  await page.getByRole('button', { name: 'Signal as a table' }).click();
  const table = page.getByRole('dialog', { name: 'Signal as a table' });
  await expect(table.getByRole('table', { name: 'Levels of each channel' })).toContainText(/A.*\d\.\d{3} V/);
  expect(
    await table.getByRole('table', { name: 'Edges in the window' }).getByRole('row').count(),
  ).toBeGreaterThan(4);
  await expectSound(page);
  await page.keyboard.press('Escape');
  await expect(table).toBeHidden();
});

test('every control of Watch can be reached by keys', async ({ page }) => {
  const call = await api();
  const rig = await demoRig(call, 'Line hauler');
  await signIn(page);
  await openWatch(page, rig.id);
  await expect(page.getByRole('button', { name: /^Keep the last/ })).toBeVisible();
  const reached = new Set<string>();
  const focusedName = () =>
    page.evaluate(() => {
      const at = document.activeElement;
      return at === document.body ? '' : (at?.getAttribute('aria-label') ?? at?.textContent ?? '');
    });
  await page.keyboard.press('Tab');
  for (let name = await focusedName(), n = 0; name !== '' && n < 60; name = await focusedName(), n++) {
    reached.add(name);
    await page.keyboard.press('Tab');
  }
  const wanted = [
    /Far view$/,
    /^Hold the picture/,
    /^shorter/,
    /^longer/,
    /^Keep the last/,
    /^Seconds to keep/,
  ];
  const missing = [...wanted, /^Signal as a table/, /^Connect$/, /^Shelf$/, /scheme$/].filter(
    (want) => ![...reached].some((name) => want.test(name)),
  );
  expect(missing.map(String), `reached: ${[...reached].join(' | ')}`).toEqual([]);

  await page.getByRole('button', { name: 'Hold the picture' }).focus();
  await page.keyboard.press('Enter');
  await expect(page.getByRole('button', { name: 'Release the picture' })).toBeFocused();
});

test('a board that stops blanks the speed and says since when', async ({ page }, { project }) => {
  const call = await api();
  const { rig, key } = await makeRig(call, `Quiet board, ${project.name}`);
  await signIn(page);
  await openWatch(page, rig.id);
  await expect(farButton(page)).toHaveText(/^waiting/);
  await expectSound(page);

  const board = stream(key, 'bench-1');
  try {
    await expect.poll(async () => firstNumber(await farButton(page).textContent())).toBeCloseTo(boardRpm, -1);
    await expect(speedOf(page)).toContainText('no findings');
  } finally {
    await board.stop();
  }
  await expect(farButton(page)).toHaveText(/^silent/);
  expect(await farButton(page).textContent()).not.toMatch(/\d/);
  const { lastBlockAt } = await call<Live>('GET', `/rigs/${rig.id}/live`);
  const since = await page.evaluate(
    (at) => new Date(at).toLocaleTimeString(undefined, { timeStyle: 'medium' }),
    lastBlockAt ?? '',
  );
  await expect(speedOf(page)).toContainText(`no block since ${since}`);
  await expect(speedOf(page)).toContainText('health unknown');
  await expect(pictureOf(page)).toContainText('not live');
  await expect(page.getByRole('region', { name: 'Numbers' })).toContainText('not live: as last seen');
  await expect(page.getByRole('img', { name: /^Wheel with/ })).not.toHaveAttribute(
    'aria-label',
    /turns a second| at \d/,
  );
  await expectSound(page);
});

test('what is wrong stands beside the speed, with its evidence and its place', async ({ page }, {
  project,
}) => {
  const call = await api();
  const { rig, key } = await makeRig(call, `Cut off, ${project.name}`);
  const board = stream(key, 'bench-1', cutOffSwingV);
  try {
    await signIn(page);
    await openWatch(page, rig.id);
    await expect(speedOf(page)).toContainText(/\d findings?/);
    const finding = page.getByRole('article', { name: /^Grave: / });
    await expect(finding).toContainText(/channel A · .*rail/);
    await expectSound(page);
    await finding.getByRole('button', { name: /^Show me/ }).click();
    // In sight already: the picture is held. Farther back: the picture is made long enough.
    const held = page.getByRole('button', { name: 'Release the picture' });
    await expect(held.or(page.getByRole('button', { name: / m?s: change to teeth$/ }))).toBeVisible();
    await expect(pictureOf(page).getByRole('img', { name: /^Signal over/ })).toBeVisible();
  } finally {
    await board.stop();
  }
});

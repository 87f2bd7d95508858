/** Journey 1: from the sign-in to a speed, by the lines that the Connect page shows, run as they are pasted. */
import { execFile } from 'node:child_process';
import { promisify } from 'node:util';
import type { Page } from '@playwright/test';
import { expect, test } from '@playwright/test';
import { expectSound, signIn } from '@/tests/e2e/bench-person';

const run = promisify(execFile);
const inShell = (lines: string) => run('bash', ['-c', lines], { timeout: 60_000 });

type Wish = { name: string; sensing: string; pulsesPerTurn: string; ratedRpm: string };

/** Fills New rig as it is shown: in steps on a phone, on one page where there is room. */
async function makeRigInForm(page: Page, { name, sensing, pulsesPerTurn, ratedRpm }: Wish): Promise<void> {
  await page.getByRole('button', { name: 'New rig' }).click();
  await expect(page.getByRole('heading', { name: 'New rig' })).toBeVisible();
  const steps = page.getByRole('list', { name: 'Steps' });
  const next = async () => {
    await expectSound(page);
    if (await steps.isVisible()) await page.getByRole('button', { name: 'Next' }).click();
  };
  await page.getByLabel('Name of the rig').fill(name);
  await page.getByRole('radio', { name: sensing }).click();
  await next();
  await page.getByLabel('Pulses per turn').fill(pulsesPerTurn);
  await next();
  await expect(page.getByRole('group', { name: 'Channel A' })).toBeVisible();
  await next();
  await page.getByLabel('Rated speed of the shaft').fill(ratedRpm);
  await expectSound(page);
  await page.getByRole('button', { name: 'Make the rig' }).click();
  await page.waitForURL(/\/rigs\/[^/]+\/connect$/);
}

/** Makes a key on the Connect page; gives back the key that is shown. */
async function makeKeyOnPage(page: Page): Promise<string> {
  await expect(page.getByRole('status').filter({ hasText: '0 of 6 done.' })).toBeVisible();
  await expectSound(page);
  await page.getByLabel('Name of the key').fill('Bench board');
  await page.getByRole('button', { name: 'Make a key' }).click();
  const shown = page.getByRole('group', { name: 'The new key' });
  await expect(shown.getByText('Bench board: this key is shown once')).toBeVisible();
  return (await shown.getByText(/^eyJ/).innerText()).trim();
}

async function linesOf(page: Page, tool: 'curl' | 'Node'): Promise<string> {
  await page.getByRole('radio', { name: tool }).click();
  await page.getByRole('button', { name: `Copy the ${tool} lines` }).click();
  await expect(page.getByRole('button', { name: 'Copied' })).toBeVisible();
  const copied = await page.evaluate(() => navigator.clipboard.readText());
  const shown = await page.getByRole('region', { name: 'Lines to paste' }).innerText();
  expect(copied.trim()).toBe(shown.trim());
  return copied;
}

async function expectAllTicked(page: Page): Promise<void> {
  const rows = page.getByRole('list', { name: 'Checklist' }).getByRole('listitem');
  await expect(page.getByText('All done: the rig speaks.')).toBeVisible();
  await expect(rows).toHaveText([
    /Key accepted.*done/,
    /First block.*done/,
    /Rate.*done/,
    /Volts in range.*done/,
    /Edges found.*done/,
    /Speed plausible.*done/,
  ]);
  await expectSound(page);
}

test('first light by curl, and the key is shown this once', async ({ page }, { project }) => {
  await signIn(page);
  await makeRigInForm(page, {
    name: `Net drum, ${project.name}`,
    sensing: 'One channel',
    pulsesPerTurn: '36',
    ratedRpm: '300',
  });
  const key = await makeKeyOnPage(page);
  await expectSound(page);
  const lines = await linesOf(page, 'curl');
  expect(lines).toContain(key);
  const { stdout } = await inShell(lines);
  expect(JSON.parse(stdout)).toMatchObject({ duplicates: 0 });
  await expectAllTicked(page);

  await page.getByRole('button', { name: 'I have it' }).click();
  await expect(page.getByText(key)).toHaveCount(0);
  await expect(page.getByRole('region', { name: 'Lines to paste' })).toContainText('PUT-THE-KEY-HERE');
  await page.reload();
  const row = page.getByRole('list', { name: 'Keys of this rig' }).getByRole('listitem');
  await expect(row).toContainText(/Bench board.*last used/);
  expect(await page.content()).not.toContain(key);
});

test('first light by Node, on two channels', async ({ page }, { project }) => {
  await signIn(page);
  await makeRigInForm(page, {
    name: `Rope guide, ${project.name}`,
    sensing: 'Quadrature',
    pulsesPerTurn: '24',
    ratedRpm: '250',
  });
  await makeKeyOnPage(page);
  const lines = await linesOf(page, 'Node');
  expect(lines).toContain('seconds = 30');
  const { stdout } = await inShell(lines.replace('seconds = 30', 'seconds = 3'));
  expect(stdout).toContain('3 s sent');
  await expectAllTicked(page);

  await page.getByRole('button', { name: 'Watch the rig' }).click();
  await page.getByRole('button', { name: 'I have read it' }).click();
  await expect(page.getByRole('heading', { level: 1 })).toContainText('Rope guide');
  await expectSound(page);
});

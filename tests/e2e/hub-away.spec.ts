/** A hub of one's own, without rigs: the empty states, and what is said while the hub is away. */
import { expect, test } from '@playwright/test';
import { expectSound, signIn } from '@/tests/e2e/bench-person';
import { startHub } from '@/tests/e2e/start-hub';
import { api, makeRig } from '@/tests/e2e/lab';

test('an empty lab, and a hub that goes away and comes back', async ({ page }) => {
  const hub = await startHub({ TURNMARK_DEMO_RIGS: '0' });
  try {
    await signIn(page, 'engineer', hub);
    await expect(page.getByRole('heading', { name: 'No rigs yet' })).toBeVisible();
    await expectSound(page);
    await page.getByRole('link', { name: 'Shelf' }).click();
    await expect(page.getByRole('heading', { name: 'Nothing kept yet' })).toBeVisible();
    await expectSound(page);

    const { rig } = await makeRig(await api('engineer', hub), 'Bollard');
    await page.goto(`${hub.url}/rigs/${rig.id}`);
    await page.getByRole('button', { name: 'I have read it' }).click();
    await expect(page.getByRole('region', { name: 'Speed' })).toContainText('waiting');
    const banner = page.getByRole('status').filter({ hasText: 'No link to the hub.' });
    await expect(banner).toHaveCount(0);

    await hub.stop();
    await expect(banner).toBeVisible();
    await expect(page.getByRole('region', { name: 'Speed' })).toContainText('not live');
    await expect(page.getByRole('button', { name: 'No link to the hub' })).toBeDisabled();
    await expectSound(page);

    await page.getByRole('button', { name: 'Try now' }).click();
    await expect(banner).toBeVisible();
    // Once the hub is back the page finds it by itself, at the latest after its longest pause.
    await hub.start();
    await expect(banner).toHaveCount(0, { timeout: 60_000 });
    await expect(page.getByRole('region', { name: 'Speed' })).toContainText('waiting');
  } finally {
    await hub.remove();
  }
});

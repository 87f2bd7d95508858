/** Journey 6, the replay: a kept fault is opened, walked through edge by edge, and read as a table. */
import type { Locator, Page } from '@playwright/test';
import { expect, test } from '@playwright/test';
import { expectSound, firstNumber, sharedHub, signIn } from '@/tests/e2e/bench-person';
import { block, boardRpm, post } from '@/tests/e2e/board';
import { analysisOf, api, keepLast, makeRig } from '@/tests/e2e/lab';
import type { Capture, Live } from '@/server/contract';
import type { Analysis } from '@/signal/model';

type Kept = { capture: Capture; analysis: Analysis };
let kept: Kept;

/** 4 s of a wheel with 0.3 s lost in the middle, under a low pass. */
test.beforeAll(async () => {
  const { project } = test.info();
  const call = await api();
  const { rig, key } = await makeRig(call, `Lossy board, ${project.name}`);
  await call('POST', `/rigs/${rig.id}/settings`, {
    reason: 'Leaves the pump outside',
    filter: { kind: 'lowpass', family: 'butterworth', order: 4, cutoffHz: 800 },
    band: { mode: 'fitted', operateFraction: 0.6, releaseFraction: 0.4 },
    holdoffS: 0,
    speed: { method: 'turn', windowS: 0.1, stoppedAfterS: 2 },
  });
  const blocks = Array.from({ length: 40 }, (_, seq) => block('bench-1', seq));
  await post(
    key,
    blocks.filter(({ seq }) => seq < 20 || seq > 22),
  );
  // The hub waits for what is missing before it calls it lost and goes on.
  await expect.poll(async () => (await call<Live>('GET', `/rigs/${rig.id}/live`)).streamS).toBeCloseTo(4, 1);
  const capture = await keepLast(call, rig.id, 10, `Blocks lost, ${project.name}`);
  kept = { capture, analysis: await analysisOf(call, capture.id) };
});

const cursor = (page: Page) => page.getByRole('slider', { name: 'Cursor in the signal' });
const overview = (page: Page) => page.getByRole('slider', { name: 'Place in the capture' });
const valueOf = (slider: Locator) => slider.getAttribute('aria-valuetext');
const secondsOf = async (page: Page) => firstNumber(await valueOf(cursor(page)));
const press = (page: Page, name: string) => page.getByRole('button', { name, exact: true }).click();

/** How much the ribbon shows, s, as its text alternative says. */
async function spanOf(page: Page): Promise<number> {
  const label = await cursor(page).locator('[role=img]').getAttribute('aria-label');
  const [, value, unit] = /^Signal over (\S+) (s|ms|µs),/.exec(label ?? '') ?? [];
  return Number(value) * { s: 1, ms: 1e-3, µs: 1e-6 }[unit as 's'];
}

async function openReplay(page: Page): Promise<void> {
  await page.goto(`${sharedHub().url}/shelf/${kept.capture.id}`);
  await expect(page.getByRole('heading', { level: 1 })).toHaveText(kept.capture.title);
  await expect(cursor(page)).toHaveAttribute('aria-valuetext', /rpm|s$/);
  await expect(page.getByRole('region', { name: 'Counted' })).toBeVisible();
}

test('open it from the Shelf; its facts, findings and table', async ({ page }) => {
  const { capture, analysis } = kept;
  await signIn(page);
  await page.getByRole('link', { name: 'Shelf' }).click();
  await page.getByRole('link', { name: capture.title }).click();
  await expect(page.getByRole('heading', { level: 1 })).toHaveText(capture.title);
  await expectSound(page);

  expect(analysis.gaps).toHaveLength(1);
  const finding = page.getByRole('article').filter({ hasText: /lost/i }).first();
  await expect(finding).toBeVisible();
  await press(page, 'Whole capture');
  await finding.getByRole('button', { name: /^Show me/ }).click();
  const { at } = analysis.findings.find((f) => f.code === 'lost-samples')!;
  await expect.poll(() => secondsOf(page)).toBeCloseTo(at, 1);
  // The gap of 0.3 s stands in the picture whole, with signal at either side.
  await expect.poll(() => spanOf(page)).toBeCloseTo(0.45, 2);
  await expect(cursor(page)).toHaveAccessibleDescription(/^Signal over .* 1 gap with lost samples/);

  await press(page, 'This stretch as a table');
  const table = page.getByRole('dialog', { name: 'This stretch as a table' });
  await expect(table.getByRole('table', { name: 'Edges' })).toContainText(/\d\.\d{6} s.*rising/);
  await expect(table.getByRole('table', { name: 'Speed' })).toContainText(`${boardRpm}.0`);
  await expect(table.getByRole('table', { name: 'Gaps of the capture' })).toContainText('1500');
  await expectSound(page);
  await page.keyboard.press('Escape');
  await expect(table).toBeHidden();
});

test('play, pause, and how fast', async ({ page }) => {
  await signIn(page);
  await openReplay(page);
  await cursor(page).press('Home');
  await expect.poll(() => secondsOf(page)).toBe(0);
  await page.getByLabel('Replay speed').selectOption('0.05 ×');
  await press(page, 'Play');
  await expect.poll(() => secondsOf(page)).toBeGreaterThan(0.01);
  await expectSound(page);
  await press(page, 'Pause');
  const stoppedAt = await valueOf(cursor(page));
  await page.evaluate(async () => {
    for (let frame = 0; frame < 20; frame++) await new Promise((drawn) => requestAnimationFrame(drawn));
  });
  expect(await valueOf(cursor(page))).toBe(stoppedAt);

  // At its own speed it comes to its end by itself, and stands there.
  await page.getByLabel('Replay speed').selectOption('1 ×');
  await press(page, 'Play');
  await expect(page.getByRole('button', { name: 'Play', exact: true })).toBeVisible();
  await expect.poll(() => secondsOf(page)).toBeCloseTo(kept.capture.durationS, 2);
});

test('from edge to edge, closer and wider, along the whole capture', async ({ page }) => {
  const edges = kept.analysis.channels['A']!.edges.map((e) => e.t);
  await signIn(page);
  await openReplay(page);
  await cursor(page).press('Home');
  for (const edge of edges.slice(0, 3)) {
    await press(page, 'To the next edge');
    await expect.poll(() => secondsOf(page)).toBeCloseTo(edge, 3);
  }
  await press(page, 'To the edge before');
  await expect.poll(() => secondsOf(page)).toBeCloseTo(edges[1]!, 3);

  const span = await spanOf(page);
  await press(page, 'Closer');
  await expect.poll(() => spanOf(page)).toBeCloseTo(span / 2, 4);
  await press(page, 'Wider');
  await press(page, 'Wider');
  await expect.poll(() => spanOf(page)).toBeCloseTo(span * 2, 3);
  await press(page, 'Later');
  await press(page, 'Whole capture');
  await expect.poll(() => spanOf(page)).toBeCloseTo(kept.capture.durationS, 1);
  await expectSound(page);

  // Two fingers on a phone, Ctrl and the wheel where there is a mouse.
  await cursor(page).scrollIntoViewIfNeeded();
  const box = (await cursor(page).boundingBox())!;
  const middle = { x: box.x + box.width / 2, y: box.y + box.height / 2 };
  const whole = await spanOf(page);
  if (test.info().project.use.hasTouch) await spread(page, middle);
  else {
    await page.mouse.move(middle.x, middle.y);
    await page.keyboard.down('Control');
    await page.mouse.wheel(0, -300);
    await page.keyboard.up('Control');
  }
  await expect.poll(() => spanOf(page)).toBeLessThan(whole * 0.9);

  const place = (await overview(page).boundingBox())!;
  await overview(page).click({ position: { x: place.width * 0.75, y: place.height / 2 } });
  await expect.poll(() => secondsOf(page)).toBeCloseTo(kept.capture.durationS * 0.75, 1);
  expect(firstNumber(await valueOf(overview(page)))).toBeCloseTo(kept.capture.durationS * 0.75, 1);
});

test('raw or filtered, with the speed in a lane of its own', async ({ page }) => {
  await signIn(page);
  await openReplay(page);
  const filtered = page.waitForResponse(
    (r) => r.url().includes('/samples?') && r.url().includes('signal=filtered'),
  );
  await press(page, 'raw signal: change to filtered');
  expect((await filtered).status()).toBe(200);
  await expect(page.getByRole('button', { name: 'filtered signal: change to raw' })).toBeVisible();
  await press(page, 'Whole capture');
  await expect(cursor(page).locator('svg text', { hasText: /^rpm$/ })).toBeVisible();
  await expect(overview(page).locator('[role=img]')).toHaveAttribute(
    'aria-label',
    /^Speed over .* 1 gap, [1-9]/,
  );
  await overview(page).click({ position: { x: 60, y: 20 } });
  await expect
    .poll(async () => firstNumber(/· (.*) rpm$/.exec((await valueOf(cursor(page))) ?? '')?.[1] ?? null))
    .toBeCloseTo(boardRpm, 0);
  await expectSound(page);
  await press(page, 'filtered signal: change to raw');
  await expect(page.getByRole('button', { name: 'raw signal: change to filtered' })).toBeVisible();
});

/** Two fingers go apart, sideways, as a hand does it. */
async function spread(page: Page, middle: { x: number; y: number }): Promise<void> {
  const cdp = await page.context().newCDPSession(page);
  const fingers = (apart: number) => [-apart, apart].map((dx, id) => ({ x: middle.x + dx, y: middle.y, id }));
  await cdp.send('Input.dispatchTouchEvent', { type: 'touchStart', touchPoints: fingers(30) });
  for (const apart of [45, 60, 75, 90]) {
    await cdp.send('Input.dispatchTouchEvent', { type: 'touchMove', touchPoints: fingers(apart) });
  }
  await cdp.send('Input.dispatchTouchEvent', { type: 'touchEnd', touchPoints: [] });
  await cdp.detach();
}

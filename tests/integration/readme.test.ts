/** The README's second example, run as it stands there: what a new user pastes must work. */
import { execFile } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { promisify } from 'node:util';
import { afterAll, beforeAll, expect, it } from 'vitest';
import type { HubUnderTest } from '@/tests/integration/hub-under-test';
import { demoPassword, startHub } from '@/tests/integration/hub-under-test';

const root = fileURLToPath(new URL('../../', import.meta.url));

let hub: HubUnderTest;
beforeAll(async () => {
  hub = await startHub();
});
afterAll(() => hub.close());

it('goes from a file to the count that two cardiologists made', async () => {
  const block = /```sh\n([\s\S]*?)```/.exec(readFileSync(`${root}README.md`, 'utf8'))?.[1];
  expect(block).toBeDefined();
  const env = { ...process.env, HUB: hub.url, PASSWORD: demoPassword };
  const { stdout } = await promisify(execFile)('bash', ['-ec', block as string], { cwd: root, env });
  expect(stdout.trim().split('\n').at(-1)).toBe('236');
});

import { defineConfig } from '@playwright/test';

const chromium = {
  executablePath: '/usr/bin/chromium',
  args: [
    '--no-sandbox',
    '--disable-gpu',
    '--disable-background-networking',
    '--disable-component-update',
    '--disable-sync',
    '--disable-quic',
    '--no-first-run',
  ],
};

export default defineConfig({
  testDir: '.',
  globalSetup: './global-setup.ts',
  workers: 1,
  fullyParallel: false,
  forbidOnly: true,
  retries: 0,
  timeout: 120_000,
  expect: { timeout: 20_000 },
  outputDir: '../../test-results',
  use: {
    browserName: 'chromium',
    launchOptions: chromium,
    actionTimeout: 20_000,
    trace: { mode: 'retain-on-failure', screenshots: false },
    permissions: ['clipboard-read', 'clipboard-write'],
  },
  projects: [
    {
      name: 'phone',
      use: { viewport: { width: 390, height: 844 }, hasTouch: true, isMobile: true, deviceScaleFactor: 2 },
    },
    { name: 'wide', use: { viewport: { width: 1440, height: 900 } } },
  ],
});

import { defineConfig } from '@playwright/test';

/**
 * Browser tests in Debian's chromium. A test is never repeated until it passes: one that passes only sometimes is
 * a bug to be found.
 */
export default defineConfig({
  testDir: './pages',
  testMatch: '**/*.test.ts',
  outputDir: '../test-results',
  retries: 0,
  workers: 1,
  forbidOnly: true,
  timeout: 60_000,
  globalTimeout: 45 * 60_000,
  expect: { timeout: 10_000 },
  use: {
    browserName: 'chromium',
    locale: 'en-GB',
    timezoneId: 'UTC',
    viewport: { width: 1280, height: 900 },
    screenshot: 'only-on-failure',
    trace: 'retain-on-failure',
    launchOptions: {
      executablePath: '/usr/bin/chromium',
      args: [
        '--no-sandbox',
        '--disable-gpu',
        '--disable-quic',
        '--no-first-run',
        '--disable-background-networking',
        '--disable-component-update',
        '--disable-sync'
      ]
    }
  }
});

import { fileURLToPath } from 'node:url'
import { defineConfig } from '@playwright/test'
import { findBrowser, LAUNCH_ARGUMENTS, NO_BROWSER } from '../.ci/find-browser.mjs'
import { freePort } from '../.ci/free-port.mjs'

// Playwright reads this file again in each of its workers: what was found the first time is handed on in the environment.
process.env.SIDELOBE_E2E_PORT ??= String(await freePort(4517))
const browser = findBrowser()
if (!browser) throw new Error(NO_BROWSER)
process.env.SIDELOBE_BROWSER = browser

const port = Number(process.env.SIDELOBE_E2E_PORT)
const origin = `http://127.0.0.1:${port}`
const inPipeline = Boolean(process.env.CI)

/** The journeys run against the built page, served as it would be anywhere: `vite build` comes first. */
export default defineConfig({
  testDir: '.',
  testMatch: '**/*.e2e.ts',
  outputDir: '../test-results',
  forbidOnly: inPipeline,
  fullyParallel: true,
  workers: 2,
  retries: inPipeline ? 1 : 0,
  timeout: 60_000,
  expect: { timeout: 10_000 },
  reporter: 'list',
  use: {
    baseURL: `${origin}/`,
    viewport: { width: 1440, height: 900 },
    locale: 'en-GB',
    timezoneId: 'UTC',
    trace: 'on-first-retry',
    launchOptions: {
      executablePath: browser,
      // no name but this machine's is ever resolved: a request that tries to leave fails, and is reported by the fixture
      args: [...LAUNCH_ARGUMENTS, '--host-resolver-rules=MAP * ~NOTFOUND, EXCLUDE 127.0.0.1'],
    },
  },
  webServer: {
    command: `node node_modules/vite/bin/vite.js preview --host 127.0.0.1 --port ${port} --strictPort`,
    cwd: fileURLToPath(new URL('..', import.meta.url)),
    url: origin,
    reuseExistingServer: false,
    timeout: 60_000,
  },
})

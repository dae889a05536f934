/**
 * Finds a Chromium or Chrome for the end-to-end journeys.
 *
 *   node .ci/find-browser.mjs       prints its path
 *
 * In this order: the environment variable SIDELOBE_BROWSER, a browser of the system, Playwright's own; on Debian as root
 * the package `chromium` is installed. Otherwise one line says what to install.
 */
import { spawnSync } from 'node:child_process'
import { existsSync, readdirSync, readFileSync } from 'node:fs'
import { createRequire } from 'node:module'
import { basename, dirname, join } from 'node:path'
import { isMain } from './is-main.mjs'

export const NO_BROWSER =
  'no browser was found: run "npx playwright install chromium", or install Chromium or Chrome, or set SIDELOBE_BROWSER to its path'

/** Without a sandbox only as root, where Chromium has none to offer; nothing that asks the network by itself. */
export const LAUNCH_ARGUMENTS = [
  ...(process.getuid?.() === 0 ? ['--no-sandbox'] : []),
  '--disable-gpu',
  '--disable-quic',
  '--no-first-run',
  '--disable-background-networking',
  '--disable-component-update',
  '--disable-sync',
]

/**
 * @param {{ install?: boolean }} [options]  install: may Debian's package be installed where nothing is found
 * @returns {string | undefined}  path of a program that starts
 * @throws Error where SIDELOBE_BROWSER names a program that does not start
 */
export function findBrowser({ install = false } = {}) {
  const wanted = process.env.SIDELOBE_BROWSER
  if (wanted) {
    if (!starts(wanted)) throw new Error(`SIDELOBE_BROWSER must name a Chromium or Chrome that starts, was ${wanted}`)
    return wanted
  }
  return systemBrowser() ?? playwrightBrowser() ?? (install ? installOnDebian() : undefined)
}

/** @returns {string | undefined} a Chromium or Chrome that the system has, in its usual places */
export function systemBrowser() {
  return usualPlaces().find((path) => existsSync(path) && starts(path))
}

function usualPlaces() {
  if (process.platform === 'darwin') {
    const apps = ['/Applications', join(process.env.HOME ?? '', 'Applications')]
    const names = ['Google Chrome', 'Chromium']
    return apps.flatMap((folder) => names.map((name) => join(folder, `${name}.app`, 'Contents', 'MacOS', name)))
  }
  if (process.platform === 'win32') {
    const roots = [process.env.PROGRAMFILES, process.env['PROGRAMFILES(X86)'], process.env.LOCALAPPDATA].filter(
      (p) => p,
    )
    const names = ['Google\\Chrome\\Application\\chrome.exe', 'Chromium\\Application\\chrome.exe']
    return roots.flatMap((folder) => names.map((name) => join(folder, name)))
  }
  const folders = [...(process.env.PATH ?? '').split(':').filter((p) => p), '/usr/bin', '/usr/local/bin', '/snap/bin']
  const names = ['chromium', 'google-chrome', 'google-chrome-stable', 'chromium-browser', 'chrome']
  return names.flatMap((name) => folders.map((folder) => join(folder, name)))
}

/** A file of the right name can still be a stub that asks for a package: it must tell its version. */
function starts(path) {
  if (process.platform === 'win32') return existsSync(path) // there --version would open a window
  const { status, stdout } = spawnSync(path, ['--version'], { encoding: 'utf8', timeout: 30_000 })
  return status === 0 && /chrom/i.test(stdout)
}

/** The browser that `npx playwright install chromium` has put into Playwright's folder: with a window or without. */
function playwrightBrowser() {
  const { chromium } = createRequire(import.meta.url)('playwright')
  const whole = chromium.executablePath()
  if (!whole) return undefined
  if (existsSync(whole) && starts(whole)) return whole
  const revision = dirname(dirname(whole))
  const shell = join(dirname(revision), basename(revision).replace(/^chromium-/, 'chromium_headless_shell-'))
  if (!existsSync(shell)) return undefined
  return readdirSync(shell, { recursive: true })
    .map(String)
    .filter((path) => /^(chrome-)?headless[_-]shell(\.exe)?$/.test(basename(path)))
    .map((path) => join(shell, path))
    .find(starts)
}

function installOnDebian() {
  if (process.getuid?.() !== 0 || !existsSync('/etc/os-release')) return undefined
  if (!/^ID=debian$/m.test(readFileSync('/etc/os-release', 'utf8'))) return undefined
  console.log('no browser was found: installing Debian\'s package "chromium"')
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' }
  for (const args of [
    ['update', '-qq'],
    ['install', '-y', '-qq', '--no-install-recommends', 'chromium'],
  ]) {
    const { status } = spawnSync('apt-get', args, { env, stdio: ['ignore', 'ignore', 'inherit'] })
    if (status !== 0) console.log(`apt-get ${args.join(' ')} failed`)
  }
  return systemBrowser()
}

if (isMain(import.meta.url)) {
  const path = findBrowser({ install: process.argv.includes('--install') })
  console.log(path ?? NO_BROWSER)
  process.exitCode = path ? 0 : 1
}

import { chmodSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { delimiter, join } from 'node:path'
import { afterEach, beforeEach, describe, expect, test, vi } from 'vitest'
import { findBrowser, systemBrowser } from '../../.ci/find-browser.mjs'
import { findPython } from '../../.ci/find-python.mjs'

let folder = ''
beforeEach(() => {
  folder = mkdtempSync(join(tmpdir(), 'sidelobe-programs-'))
})
afterEach(() => {
  vi.unstubAllEnvs()
  rmSync(folder, { recursive: true })
})

/** A program that prints a line and ends with a code. */
function plant(name: string, line: string, code = 0): string {
  const path = join(folder, name)
  writeFileSync(path, `#!/bin/sh\necho "${line}"\nexit ${code}\n`)
  chmodSync(path, 0o755)
  return path
}

describe.skipIf(process.platform !== 'linux')('a browser', () => {
  test('SIDELOBE_BROWSER comes first', () => {
    plant('chromium', 'Chromium 150.0')
    const own = plant('mine', 'Chromium 149.0')
    vi.stubEnv('PATH', `${folder}${delimiter}${process.env.PATH}`)
    vi.stubEnv('SIDELOBE_BROWSER', own)
    expect(findBrowser()).toBe(own)
  })

  test('SIDELOBE_BROWSER that does not start is an error that names it, not a silent second choice', () => {
    vi.stubEnv('SIDELOBE_BROWSER', join(folder, 'absent'))
    expect(() => findBrowser()).toThrow(join(folder, 'absent'))
  })

  test('one on the PATH is found', () => {
    const own = plant('chromium', 'Chromium 150.0')
    vi.stubEnv('PATH', `${folder}${delimiter}${process.env.PATH}`)
    expect(systemBrowser()).toBe(own)
  })

  test('a stub that only asks for a package is passed over', () => {
    const stub = plant('chromium', 'please install chromium', 1)
    const real = plant('google-chrome', 'Google Chrome 150.0')
    vi.stubEnv('PATH', `${folder}${delimiter}${process.env.PATH}`)
    expect(systemBrowser()).not.toBe(stub)
    expect([real, '/usr/bin/chromium', '/usr/local/bin/chromium', '/snap/bin/chromium']).toContain(systemBrowser())
  })
})

describe.skipIf(process.platform === 'win32')('a Python', () => {
  test('SIDELOBE_PYTHON comes first', () => {
    const own = plant('python', '1.99.0')
    vi.stubEnv('SIDELOBE_PYTHON', own)
    expect(findPython()).toEqual({ path: own, version: '1.99.0' })
  })

  test('one that cannot import the module is passed over', () => {
    plant('python3', 'ModuleNotFoundError', 1)
    plant('python', '1.99.0')
    vi.stubEnv('SIDELOBE_PYTHON', '')
    vi.stubEnv('PATH', folder)
    // /usr/bin/python3 is asked by its full path: no real Python has this module
    expect(findPython('no_such_module_as_this')).toEqual({ path: 'python', version: '1.99.0' })
  })

  test('where none can import the module there is none', () => {
    plant('python', 'ModuleNotFoundError', 1)
    vi.stubEnv('SIDELOBE_PYTHON', '')
    vi.stubEnv('PATH', folder)
    expect(findPython('no_such_module_as_this')).toBeUndefined()
  })
})

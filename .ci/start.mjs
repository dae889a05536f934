/**
 * `npm start`: builds the page, serves it on this machine only, prints the address and opens it where a browser exists.
 *
 *   npm start -- [--port 4173] [--no-open]
 *
 * The next free port is taken where the usual one is in use. Ctrl-C ends it.
 */
import { spawn } from 'node:child_process'
import { dirname } from 'node:path'
import { fileURLToPath } from 'node:url'
import { parseArgs } from 'node:util'
import { build, preview } from 'vite'
import { systemBrowser } from './find-browser.mjs'

const root = dirname(dirname(fileURLToPath(import.meta.url)))
const { values } = parseArgs({
  options: { port: { type: 'string', default: '4173' }, 'no-open': { type: 'boolean', default: false } },
})
const port = Number(values.port)
if (!Number.isInteger(port) || port < 1 || port > 65_535) {
  console.error(`--port must be an integer from 1 to 65535, was ${values.port}`)
  process.exit(2)
}

await build({ root, logLevel: 'warn' })
const server = await preview({ root, preview: { host: '127.0.0.1', port, strictPort: false, open: false } })
const address = `http://localhost:${server.httpServer.address().port}/`
console.log(`Sidelobe is at ${address}\nCtrl-C stops it.`)
for (const signal of ['SIGINT', 'SIGTERM']) process.on(signal, () => process.exit(0))
stopWithNpm()
if (!values['no-open']) open(address)

/** The shell between npm and this program does not hand on a signal that ends npm: without a parent the server ends too. */
function stopWithNpm() {
  if (!process.env.npm_lifecycle_event || process.platform === 'win32') return
  const parent = process.ppid
  setInterval(() => {
    if (process.ppid !== parent) process.exit(0)
  }, 500).unref()
}

/** Opens the address in the user's browser; not in a pipeline or without a display. A failure is no failure. */
function open(url) {
  const { CI, DISPLAY, WAYLAND_DISPLAY } = process.env
  if (CI) return
  if (process.platform === 'darwin') start('open', [url])
  else if (process.platform === 'win32') start('cmd', ['/c', 'start', '', url])
  else if (DISPLAY || WAYLAND_DISPLAY) {
    start('xdg-open', [url], () => {
      const browser = systemBrowser()
      if (browser) start(browser, [url])
    })
  }
}

function start(program, args, otherwise = () => {}) {
  const child = spawn(program, args, { stdio: 'ignore', detached: true })
  child.on('error', otherwise)
  child.unref()
}

import { createServer } from 'node:net'

/**
 * The first free port of this machine from `port` on; without one, any free port.
 *
 * @param {number} port
 * @returns {Promise<number>}
 */
export async function freePort(port) {
  for (const candidate of [...Array(20).keys()].map((i) => port + i)) {
    if (await probe(candidate)) return candidate
  }
  return probe(0)
}

/** @returns {Promise<number>} the port that could be listened on, 0 where it could not */
function probe(port) {
  return new Promise((resolve) => {
    const server = createServer()
    server.once('error', () => resolve(0))
    server.listen(port, '127.0.0.1', () => {
      const address = server.address()
      server.close(() => resolve(address.port))
    })
  })
}

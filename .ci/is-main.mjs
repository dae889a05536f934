import { realpathSync } from 'node:fs'
import { fileURLToPath } from 'node:url'

/**
 * Was this module started as the program (`node file.mjs`) rather than imported?
 *
 * @param {string} url  the module's import.meta.url
 * @returns {boolean}
 */
export function isMain(url) {
  return process.argv[1] !== undefined && realpathSync(process.argv[1]) === realpathSync(fileURLToPath(url))
}

/**
 * What older pages kept, brought forward version by version: files, links and the browser's own storage alike. A step adds what its version
 * did not have yet and touches nothing that the user said. What it adds is written out here, and stays as it is when the page itself
 * begins with something else.
 */

/** The present version of the workspace's schema. */
export const VERSION = 2

/** By the version that they start from. */
const STEPS: Readonly<Record<number, (older: object) => object>> = {
  // 1: no claims, nothing stated for the write-up
  1: (older) => ({
    ...older,
    claims: { title: '', filteredBefore: null, list: [] },
    statements: {},
  }),
}

/**
 * @returns what is to be held against the present schema, which may still refuse it; or why it cannot be read at all. A value without a
 * known version is handed on as it is.
 */
export function broughtForward(value: unknown): { ok: true; value: unknown } | { ok: false; reason: string } {
  let present = value
  for (let version = versionOf(value); version !== null && version !== VERSION; version++) {
    if (version > VERSION)
      return { ok: false, reason: `this workspace has version ${version}, newer than this page can read (${VERSION})` }
    const step = STEPS[version]
    if (!step) break
    present = { ...step(present as object), version: version + 1 }
  }
  return { ok: true, value: present }
}

function versionOf(value: unknown): number | null {
  if (typeof value !== 'object' || value === null || !('version' in value)) return null
  return typeof value.version === 'number' && Number.isFinite(value.version) ? value.version : null
}

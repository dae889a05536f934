/**
 * The browser's own storage. Where there is none, or it is shut off (which some browsers say by throwing at the first touch) or does not
 * answer, nothing is kept and nothing else depends on it.
 */
import { del, get, set, update } from 'idb-keyval'

/** A storage that has not answered by then is taken for none; what it still does afterwards does no harm. */
const PATIENCE_MS = 10_000

/** @throws Error where the storage refuses or stays silent. */
function answered<T>(ask: () => Promise<T>): Promise<T> {
  return new Promise((resolve, reject) => {
    const timer = setTimeout(() => reject(new Error('the storage does not answer')), PATIENCE_MS)
    // the first touch itself may throw
    Promise.resolve()
      .then(ask)
      .then(resolve, reject)
      .finally(() => clearTimeout(timer))
  })
}

/** What was kept under a key; undefined where there is nothing, or no storage. */
export async function recall<T>(key: string): Promise<T | undefined> {
  try {
    return await answered(() => get<T>(key))
  } catch {
    return undefined
  }
}

/** @returns whether it was kept: storage can be full, or forbidden. */
export function remember(key: string, value: unknown): Promise<boolean> {
  return done(() => set(key, value))
}

/**
 * Looks at what is kept and decides what is kept from now on, in one transaction: no other tab writes between the two.
 *
 * @returns whether it was kept.
 */
export function revise(key: string, decide: (present: unknown) => unknown): Promise<boolean> {
  return done(() => update<unknown>(key, decide))
}

export function forget(key: string): Promise<boolean> {
  return done(() => del(key))
}

async function done(act: () => Promise<void>): Promise<boolean> {
  try {
    await answered(act)
    return true
  } catch {
    return false
  }
}

/**
 * The browser's own storage. Where there is none, or it is shut off (which some browsers say by throwing at the first touch), nothing is
 * kept and nothing else depends on it.
 */
import { get, set } from 'idb-keyval'

/** What was kept under a key; undefined where there is nothing, or no storage. */
export async function recall<T>(key: string): Promise<T | undefined> {
  try {
    return await get<T>(key)
  } catch {
    return undefined
  }
}

/** @returns whether it was kept: storage can be full, or forbidden. */
export async function remember(key: string, value: unknown): Promise<boolean> {
  try {
    await set(key, value)
    return true
  } catch {
    return false
  }
}

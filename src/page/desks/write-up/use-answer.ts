/** What a worker answers to a question that changes: the last answer stays, known to be old, until the new one is there. */
import { useEffect, useRef, useState } from 'react'

/** A question that is being dragged or typed is not asked before it rests. */
const REST_MS = 120

export interface Answer<T> {
  /** Null before there was one. */
  value: T | null
  /** What stands there is not the answer to the present question. */
  stale: boolean
  failure: string | null
  again: () => void
}

/**
 * @param key  says the question in full: another key cancels what was asked before. Null: nothing is asked.
 * @param ask  asks the question of the moment.
 */
export function useAnswer<T>(key: string | null, ask: (signal: AbortSignal) => Promise<T>): Answer<T> {
  const [got, setGot] = useState<{ key: string; value: T } | null>(null)
  const [failed, setFailed] = useState<{ key: string; reason: string } | null>(null)
  const [attempt, setAttempt] = useState(0)
  const present = useRef(ask)
  present.current = ask
  // biome-ignore lint/correctness/useExhaustiveDependencies: another attempt asks the same question again
  useEffect(() => {
    if (key === null) return
    const control = new AbortController()
    setFailed(null)
    const timer = setTimeout(() => {
      present.current(control.signal).then(
        (value) => {
          if (!control.signal.aborted) setGot({ key, value })
        },
        (error: unknown) => {
          if (control.signal.aborted) return
          setFailed({ key, reason: error instanceof Error ? error.message : String(error) })
        },
      )
    }, REST_MS)
    return () => {
      clearTimeout(timer)
      control.abort()
    }
  }, [key, attempt])
  return {
    value: got?.value ?? null,
    stale: got?.key !== key,
    failure: failed?.key === key ? (failed?.reason ?? null) : null,
    again: () => setAttempt((count) => count + 1),
  }
}

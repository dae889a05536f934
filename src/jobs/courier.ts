/**
 * Work away from the page's thread. A courier owns one worker: it is started when first asked, runs one call at a time in the order asked,
 * is ended by an abort (the only sure way to stop a computation), and is dropped when it has been idle for a while.
 */
import { type Remote, wrap } from 'comlink'

/** What a worker offers: named functions of plain data. */
export type WorkerApi = Record<string, (...args: never[]) => unknown>

export interface Courier<Api extends WorkerApi> {
  /** @throws DOMException 'AbortError' when the signal aborts, or whatever the function throws. */
  call<Name extends keyof Api & string>(
    name: Name,
    args: Parameters<Api[Name]>,
    signal?: AbortSignal,
  ): Promise<Awaited<ReturnType<Api[Name]>>>
}

const IDLE_MS = 15_000

export function courier<Api extends WorkerApi>(start: () => Worker): Courier<Api> {
  let worker: Worker | null = null
  let remote: Remote<Api> | null = null
  let idle: ReturnType<typeof setTimeout> | undefined
  let queue: Promise<unknown> = Promise.resolve()

  const drop = () => {
    worker?.terminate()
    worker = null
    remote = null
  }

  const run = <Name extends keyof Api & string>(name: Name, args: Parameters<Api[Name]>, signal?: AbortSignal) =>
    new Promise<Awaited<ReturnType<Api[Name]>>>((resolve, reject) => {
      const aborted = () => new DOMException('the work was cancelled', 'AbortError')
      if (signal?.aborted) return reject(aborted())
      clearTimeout(idle)
      if (!worker || !remote) {
        worker = start()
        remote = wrap<Api>(worker)
      }
      // A call ends once: an answer that was under way when its worker was ended must not touch the next call's worker.
      let settled = false
      const finish = () => {
        settled = true
        signal?.removeEventListener('abort', abort)
        worker?.removeEventListener('error', fail)
        clearTimeout(idle)
        idle = setTimeout(drop, IDLE_MS)
      }
      const abort = () => {
        finish()
        drop()
        reject(aborted())
      }
      const fail = (event: ErrorEvent) => {
        finish()
        drop()
        reject(new Error(event.message || 'the worker could not be started'))
      }
      signal?.addEventListener('abort', abort, { once: true })
      worker.addEventListener('error', fail, { once: true })
      const remoteCall = remote[name] as unknown as (...values: unknown[]) => Promise<Awaited<ReturnType<Api[Name]>>>
      remoteCall(...(args as unknown[])).then(
        (value) => {
          if (settled) return
          finish()
          resolve(value)
        },
        (error: unknown) => {
          if (settled) return
          finish()
          reject(error)
        },
      )
    })

  return {
    call(name, args, signal) {
      const next = queue.then(() => run(name, args, signal))
      queue = next.catch(() => undefined)
      return next
    },
  }
}

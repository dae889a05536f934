/**
 * Several couriers for work that falls into independent pieces. A call goes to the first worker that is free, and waits its turn where none is; calls
 * begin in the order asked.
 */
import { type Courier, courier, type WorkerApi } from './courier.ts'

export interface Pool<Api extends WorkerApi> extends Courier<Api> {
  /** Calls that can run at once. */
  readonly size: number
}

/**
 * @param start starts one worker; not called before there is work for it.
 * @throws RangeError for a size that is no positive whole number.
 */
export function pool<Api extends WorkerApi>(start: () => Worker, size: number): Pool<Api> {
  if (!Number.isInteger(size) || size < 1) throw new RangeError(`size must be a positive whole number, was ${size}`)
  // the first ones are taken first, so that little work keeps few workers alive
  const free = Array.from({ length: size }, (_, place) => ({ place, courier: courier<Api>(start) }))
  const waiting: ((given: (typeof free)[number]) => void)[] = []

  const take = (signal?: AbortSignal): Promise<(typeof free)[number]> =>
    new Promise((resolve, reject) => {
      const aborted = () => new DOMException('the work was cancelled', 'AbortError')
      if (signal?.aborted) return reject(aborted())
      const first = free.shift()
      if (first) return resolve(first)
      const turn = (given: (typeof free)[number]) => {
        signal?.removeEventListener('abort', leave)
        resolve(given)
      }
      const leave = () => {
        waiting.splice(waiting.indexOf(turn), 1)
        reject(aborted())
      }
      signal?.addEventListener('abort', leave, { once: true })
      waiting.push(turn)
    })

  const giveBack = (one: (typeof free)[number]) => {
    const next = waiting.shift()
    if (next) return next(one)
    free.push(one)
    free.sort((a, b) => a.place - b.place)
  }

  return {
    size,
    call(name, args, signal) {
      return take(signal).then((one) => one.courier.call(name, args, signal).finally(() => giveBack(one)))
    },
  }
}

const MOST_WORKERS = 4

/** Workers for a machine with so many logical cores: one core is left to the page, two workers are never too many. */
export const poolSize = (cores: number) => Math.max(2, Math.min(MOST_WORKERS, Math.floor(cores || 0) - 1))

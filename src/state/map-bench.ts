/** A worker of the map's own, so that a long map holds up neither reading nor evaluating. */
import { courier } from '../jobs/index.ts'
import type { BenchApi } from './bench.worker.ts'
import { runMap } from './map-run.ts'
import type { MapRequest } from './trade-off.ts'

const mapBench = courier<BenchApi>(
  () => new Worker(new URL('./bench.worker.ts', import.meta.url), { type: 'module', name: 'sidelobe map' }),
)

export const computeMap = (request: MapRequest, signal: AbortSignal) =>
  runMap(
    request,
    (key, ...rest) => {
      const [question, order, batches, budgetMs, stop] = rest
      return mapBench.call('mapSlice', [key, question, order, batches, budgetMs], stop)
    },
    signal,
  )

/** Workers of the maps' own, so that a long map holds up neither reading nor evaluating. */
import { pool, poolSize } from '../jobs/index.ts'
import type { BenchApi } from './bench.worker.ts'
import { runMaps } from './map-run.ts'
import type { MapRequest } from './trade-off.ts'

const mapBench = pool<BenchApi>(
  () => new Worker(new URL('./bench.worker.ts', import.meta.url), { type: 'module', name: 'sidelobe map' }),
  poolSize(typeof navigator === 'undefined' ? 1 : navigator.hardwareConcurrency),
)

/** Several maps, their first rounds first. */
export const computeMaps = (requests: readonly MapRequest[], signal: AbortSignal) =>
  runMaps(
    requests,
    (key, question, order, batches, budgetMs, before, stop) =>
      mapBench.call('mapSlice', [key, question, order, batches, budgetMs, before], stop),
    signal,
    mapBench.size,
  )

/** Simulated noise of the readout as it is computed: refined while the user looks, and kept by what it hangs on. */
import { createStore } from 'zustand/vanilla'
import { courier } from '../jobs/index.ts'
import { inWords } from '../words/index.ts'
import type { BenchApi } from './bench.worker.ts'
import { withEntry } from './kept-entries.ts'
import { NOISE_DRAWS, type NoiseQuestion, type SimulatedNoise } from './simulated-noise.ts'

export interface NoiseState {
  readonly key: string
  readonly noise: SimulatedNoise | null
  readonly reason: string | null
}

const KEPT = 30
const SLICE_MS = 60

export const noiseStore = createStore<{ known: Readonly<Record<string, NoiseState>> }>(() => ({ known: {} }))

const keep = (state: NoiseState) => noiseStore.setState(({ known }) => ({ known: withEntry(known, state, KEPT) }))

const bench = courier<BenchApi>(
  () => new Worker(new URL('./bench.worker.ts', import.meta.url), { type: 'module', name: 'sidelobe noise' }),
)

type Slice = (key: string, question: NoiseQuestion | null, budgetMs: number) => Promise<SimulatedNoise | null>

/** Simulates until enough draws are there or the signal aborts (between two slices). */
export async function simulateNoise(
  key: string,
  question: NoiseQuestion,
  signal: AbortSignal,
  slice: Slice = (...args) => bench.call('noiseSlice', args),
): Promise<void> {
  let noise = noiseStore.getState().known[key]?.noise ?? null
  let asked = false
  try {
    // where no draw has such a score, the draws never come to that many
    for (let slices = 0; !signal.aborted && slices < NOISE_DRAWS && (noise?.draws ?? 0) < NOISE_DRAWS; slices++) {
      const next = await slice(key, asked ? null : question, SLICE_MS)
      asked = asked ? next !== null : true
      if (!next || signal.aborted) continue
      noise = next
      keep({ key, noise, reason: null })
    }
  } catch (error) {
    keep({ key, noise: null, reason: error instanceof Error ? inWords(error.message) : String(error) })
  }
}

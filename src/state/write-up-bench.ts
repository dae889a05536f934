/** A worker of the write-up's own, so that code for a long kernel holds up neither reading nor evaluating. */
import { courier } from '../jobs/index.ts'
import type { WriteUpFacts } from '../words/index.ts'
import type { BenchApi } from './bench.worker.ts'
import type { CodeQuestion } from './write-up.ts'

const writeUpBench = courier<BenchApi>(
  () => new Worker(new URL('./bench.worker.ts', import.meta.url), { type: 'module', name: 'sidelobe write-up' }),
)

/** @throws DOMException 'AbortError' when the signal aborts, or as `exportedCode`. */
export const askForCode = (question: CodeQuestion, signal: AbortSignal) =>
  writeUpBench.call('exportedCode', [question], signal)

/** @throws DOMException 'AbortError' when the signal aborts, or as `writeUpWords`. */
export const askForWords = (facts: WriteUpFacts, signal: AbortSignal) =>
  writeUpBench.call('writeUpWords', [facts], signal)

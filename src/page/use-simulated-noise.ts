import { useEffect, useMemo } from 'react'
import { useStore } from 'zustand'
import type { Evaluation } from '../state/evaluation.ts'
import { questionKey } from '../state/kept-entries.ts'
import { type NoiseState, noiseStore, simulateNoise } from '../state/noise-run.ts'
import { dataStore, recordedData } from '../state/recorded-data.ts'
import { noiseQuestion } from '../state/simulated-noise.ts'
import type { Workspace } from '../state/workspace.ts'

/** What is being dragged is not simulated before it rests. */
const REST_MS = 200

/** The simulated noise of the score; undefined where none is asked for or none is there yet. */
export function useSimulatedNoise(workspace: Workspace, evaluation: Evaluation): NoiseState | undefined {
  const data = useStore(dataStore, (state) => recordedData(workspace.source, state.files))
  const question = useMemo(() => noiseQuestion(workspace, evaluation, data), [workspace, evaluation, data])
  const key = useMemo(() => question && questionKey(question), [question])
  // biome-ignore lint/correctness/useExhaustiveDependencies: the question is said in full by its key
  useEffect(() => {
    if (!question || key === null) return
    const control = new AbortController()
    const timer = setTimeout(() => void simulateNoise(key, question, control.signal), REST_MS)
    return () => {
      clearTimeout(timer)
      control.abort()
    }
  }, [key])
  return useStore(noiseStore, ({ known }) => (key === null ? undefined : known[key]))
}

/** The page's main figure and the effective window under it, on one time axis with one cursor. */
import { useCallback, useMemo, useState } from 'react'
import type { Evaluation } from '../state/evaluation.ts'
import type { Workspace } from '../state/workspace.ts'
import { useView } from './hooks.ts'
import { largestMomentMs, sampleNear, timeAxisOf } from './time-axis.ts'
import { useWindows } from './time-bands.tsx'
import { TimeFigure } from './time-figure.tsx'
import './time-figures.css'
import { WindowStrip } from './window-strip.tsx'

interface TimeFiguresProps {
  evaluation: Evaluation
  /** The workspace that the evaluation belongs to. */
  workspace: Workspace
  /** Names filter, data and score for a saved figure; read when it is saved. */
  caption: () => string
}

export function TimeFigures({ evaluation, workspace, caption }: TimeFiguresProps) {
  const { timesMs, curves, chosen, delayIncluded } = evaluation
  const axis = useMemo(() => timeAxisOf(timesMs), [timesMs])
  const windows = useWindows(workspace, axis)
  const { before } = curves[chosen]
  const restMs = useMemo(() => largestMomentMs(before, axis), [before, axis])

  // The cursor rests where the waveform is largest until it is moved; on another epoch it rests again.
  const epoch = `${axis.firstMs} ${axis.lastMs} ${axis.stepMs}`
  const [moved, setMoved] = useState<{ ms: number; epoch: string } | null>(null)
  const cursor = sampleNear(axis, moved?.epoch === epoch ? moved.ms : restMs)
  const moveTo = useCallback((ms: number) => setMoved({ ms, epoch }), [epoch])

  // What a causal chain leaves of a wave is late as well: its difference is no activity, and drawn only when it is asked for.
  const [delayed, setDelayed] = useState(false)
  const takenOut = useView((view) => view.takenOut)
  const shared = { evaluation, workspace, caption, axis, windows, cursor, onCursor: moveTo }
  return (
    <div className="time-figures">
      <TimeFigure {...shared} takenOut={delayIncluded ? delayed : takenOut} onDelayed={setDelayed} />
      <WindowStrip {...shared} />
    </div>
  )
}

import { useMemo } from 'react'
import { Cursor, type Frame, linearScale, logScale } from '../plot/index.ts'
import type { Evaluation } from '../state/evaluation.ts'
import type { View } from '../state/view.ts'
import { valueAt } from './curve-course.ts'
import type { CutoffMark } from './cutoff-marks.ts'
import { FrequencyGain } from './frequency-gain.tsx'
import { FrequencyPhase } from './frequency-phase.tsx'
import { delayDomain, delayPieces, phasePieces } from './frequency-pieces.ts'
import { gainAxis, gainsIn } from './gain-axis.ts'
import { drawnPins } from './pin-line.tsx'

interface FrequencyPlotProps {
  evaluation: Evaluation
  shows: View['frequencyShows']
  unit: View['gainUnit']
  frame: Frame
  fromHz: number
  toHz: number
  cutoffs: CutoffMark[]
  at: number
  reading: string
  onDrag: (dragging: boolean) => void
  onCursor: (hz: number) => void
}

export function FrequencyPlot(props: FrequencyPlotProps) {
  const { evaluation, shows, unit, frame, fromHz, toHz, cutoffs, at, reading, onDrag, onCursor } = props
  const { frequency } = evaluation
  const { left, right, top, bottom } = frame
  const x = useMemo(() => logScale([fromHz, toHz], [left, right]), [fromHz, toHz, left, right])
  const axis = useMemo(() => {
    const pinned = drawnPins(evaluation).map(({ result }) => result.gain)
    return gainAxis(evaluation.frequency, unit, pinned)
  }, [evaluation, unit])
  const piecesOf = shows === 'phase' ? phasePieces : delayPieces
  const pieces = useMemo(() => piecesOf(frequency), [frequency, piecesOf])
  const pinned = useMemo(
    () =>
      drawnPins(evaluation).map(({ index, name, result }) => {
        const { gain, phaseRad, groupDelayMs } = result
        return { index, name, pieces: piecesOf({ hz: frequency.hz, gain, phaseRad, groupDelayMs }) }
      }),
    [evaluation, frequency, piecesOf],
  )
  const y = useMemo(() => {
    const domain = {
      gain: axis.domain,
      phase: PHASE_DOMAIN,
      'group delay': delayDomain([pieces, ...pinned.map((pin) => pin.pieces)].flatMap(({ values }) => values)),
    }[shows]
    return linearScale(domain, [bottom, top])
  }, [shows, axis, pieces, pinned, bottom, top])
  const value =
    shows === 'gain'
      ? gainsIn(unit, [valueAt(frequency.hz, frequency.gain, at)], axis)[0]
      : valueAt(pieces.hz, pieces.values, at)
  const cursor = (
    <Cursor
      frame={frame}
      scale={x}
      value={at}
      dots={[{ y: Math.min(bottom, y.toPixel(value)), tone: 'after' }]}
      min={fromHz}
      max={toHz}
      step={at * 0.02}
      name={CURSOR}
      valueText={reading}
      onChange={onCursor}
    />
  )
  return shows === 'gain' ? (
    <FrequencyGain {...{ evaluation, unit, frame, x, y, axis, cutoffs, onDrag }}>{cursor}</FrequencyGain>
  ) : (
    <FrequencyPhase {...{ frequency, shows, frame, x, y, pieces, pinned }}>{cursor}</FrequencyPhase>
  )
}

/** Name of the cursor among the figure's sliders. */
export const CURSOR = 'frequency cursor'
const PHASE_DOMAIN: [number, number] = [-200, 200]

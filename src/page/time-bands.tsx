/** The score window and the baseline in the time figure, dragged and resized by pointer and keyboard. */
import type { Score } from '../erp/score.ts'
import { Band, type BandValue, type Frame, Handle, type Scale, snapToGrid } from '../plot/index.ts'
import { statedWindow } from '../state/stated-window.ts'
import { beginGesture, cancelGesture, endGesture, say } from '../state/store.ts'
import type { Workspace } from '../state/workspace.ts'
import { useWorkspace } from './hooks.ts'
import { msText, type TimeAxis } from './time-axis.ts'
import { HANDLE_AT } from './time-labels.ts'

export interface Windows {
  score: Score
  baseline: Workspace['baseline']
}

/**
 * The windows as they are drawn: those of the sentence at this moment, so that a window under the pointer never waits for a long
 * computation; those of the figure where the sentence's lie outside the epoch or belong to other data.
 */
export function useWindows(of: Workspace, axis: TimeAxis): Windows {
  const now = useWorkspace()
  if (now.source !== of.source) return of
  const fits = (window: { fromMs: number; toMs: number }) =>
    window.fromMs <= window.toMs &&
    window.fromMs > axis.firstMs - axis.stepMs &&
    window.toMs < axis.lastMs + axis.stepMs
  return {
    score: fits(now.score) ? now.score : of.score,
    baseline: now.baseline === 'none' || fits(now.baseline) ? now.baseline : of.baseline,
  }
}

interface TimeBandsProps {
  frame: Frame
  x: Scale
  axis: TimeAxis
  windows: Windows
  /** A window is being moved, or no longer. */
  onHold: (held: boolean) => void
}

export function TimeBands({ frame, x, axis, windows, onHold }: TimeBandsProps) {
  const { score, baseline } = windows
  const limits = { min: axis.firstMs, max: axis.lastMs, step: axis.stepMs, origin: axis.firstMs }
  const gesture = {
    onChangeStart: () => {
      onHold(true)
      beginGesture()
    },
    onChangeEnd: () => {
      onHold(false)
      endGesture()
    },
    onChangeCancel: () => {
      onHold(false)
      cancelGesture()
    },
  }
  const common = { frame, scale: x, ground: false, handleAt: HANDLE_AT, valueText: msText, ...limits, ...gesture }
  const sayScore = (band: BandValue) =>
    say((w) => ({ ...w, score: { ...w.score, ...statedWindow(band, axis.stepMs) } }), 'score-window')
  return (
    <>
      {baseline === 'none' ? null : (
        <Band
          {...common}
          look="light"
          label="baseline"
          value={{ from: baseline.fromMs, to: baseline.toMs }}
          onChange={(band) => say((w) => ({ ...w, baseline: statedWindow(band, axis.stepMs) }), 'baseline')}
        />
      )}
      {score.kind === 'moment' ? (
        <Handle
          {...gesture}
          scale={x}
          value={score.fromMs}
          y={frame.top + frame.plotHeight * HANDLE_AT}
          min={axis.firstMs}
          max={axis.lastMs}
          tone="ink"
          label="moment of the score"
          valueText={msText}
          snap={(ms) => snapToGrid(ms, limits)}
          stepBy={(ms, steps) => snapToGrid(ms + steps * axis.stepMs, limits)}
          onChange={(ms) => sayScore({ from: ms, to: ms })}
        />
      ) : (
        <Band {...common} label="score window" value={{ from: score.fromMs, to: score.toMs }} onChange={sayScore} />
      )}
    </>
  )
}

import { Handle } from '../plot/index.ts'
import type { Scale } from '../plot/scale.ts'
import { replaceStage } from '../state/chain-actions.ts'
import { beginGesture, cancelGesture, endGesture, say } from '../state/store.ts'
import { type CutoffMark, withCutoff } from './cutoff-marks.ts'
import type { PlacedCutoff } from './frequency-curves.ts'
import { hzText } from './frequency-words.ts'

interface CutoffHandlesProps {
  placed: readonly PlacedCutoff[]
  x: Scale
  /** A drag begins (true) or ends. */
  onDrag: (dragging: boolean) => void
}

/** One circle per cutoff of the stages applied here; dragging it says the cutoff. */
export function CutoffHandles({ placed, x, onDrag }: CutoffHandlesProps) {
  const gesture = {
    onChangeStart: () => {
      beginGesture()
      onDrag(true)
    },
    onChangeEnd: () => {
      endGesture()
      onDrag(false)
    },
    onChangeCancel: () => {
      cancelGesture()
      onDrag(false)
    },
  }
  return placed.map(({ cutoff, y }) => (
    <Handle
      key={`${cutoff.stage} ${cutoff.edge}`}
      scale={x}
      value={cutoff.hz}
      y={y}
      min={cutoff.minHz}
      max={cutoff.maxHz}
      stepBy={(hz, steps) => Number((hz * 1.01 ** steps).toPrecision(3))}
      label={cutoff.label}
      valueText={hzText}
      {...gesture}
      onChange={(hz) => setCutoff(cutoff, hz)}
    />
  ))
}

/** Says one cutoff; those of one drag are one step of undo. */
function setCutoff({ stage, edge }: CutoffMark, hz: number): void {
  say((workspace) => {
    const spec = workspace.chain[stage]
    // undo during a drag may have taken the stage away
    if (!spec) return workspace
    return { ...workspace, chain: replaceStage(workspace.chain, stage, withCutoff(spec, edge, hz)) }
  }, `stage:${stage}:cutoff`)
}

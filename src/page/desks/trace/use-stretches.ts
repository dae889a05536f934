/** Splitting, moving and joining stretches. Each is a step of undo; a boundary that is dragged is one. */
import { beginGesture, cancelGesture, endGesture, say } from '../../../state/store.ts'
import { withStretches } from '../../../state/trace-actions.ts'
import { moveBoundary, removeBoundary, splitStretch, type Stretches } from '../../../state/trace-facts.ts'

/** @param stretches those that are shown, whether the user's or the suggested ones. */
export function useStretches(stretches: Stretches, timesMs: Float64Array) {
  return {
    gesture: { onChangeStart: beginGesture, onChangeEnd: endGesture, onChangeCancel: cancelGesture },
    move: (index: number, atMs: number) => {
      const moved = moveBoundary(stretches, index, timesMs, atMs)
      if (moved !== stretches) say((w) => withStretches(w, moved), 'stretches')
    },
    split: (atMs: number) => {
      const split = splitStretch(stretches, timesMs, atMs)
      if (split !== stretches) say((w) => withStretches(w, split))
    },
    remove: (index: number) => say((w) => withStretches(w, removeBoundary(stretches, index))),
    suggested: () => say((w) => withStretches(w, null)),
  }
}

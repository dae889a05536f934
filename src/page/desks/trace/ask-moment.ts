/** Asks for the value at a moment from within the time figure: by a click while the desk is open, or by the key T on its cursor. */
import { type KeyboardEvent, type MouseEvent, type PointerEvent, type RefObject, useRef } from 'react'
import { makeFrame, svgPoint } from '../../../plot/index.ts'
import { say } from '../../../state/store.ts'
import { askingMoment } from '../../../state/trace-actions.ts'
import { viewStore } from '../../../state/view.ts'
import { useView } from '../../hooks.ts'
import { cursorAt, MARGIN } from '../../shared-axis.ts'
import type { TimeAxis } from '../../time-axis.ts'
import { openDesk } from '../open-desk.ts'

/** A pointer that went further than this was dragging something. */
const STILL_PX = 3

/**
 * What the element around the figure listens to.
 *
 * @param cursor sample under the cursor.
 */
export function useAskMoment(svg: RefObject<SVGSVGElement | null>, axis: TimeAxis, cursor: number) {
  const pressed = useRef<{ x: number; y: number } | null>(null)
  const open = useView((view) => view.desk === 'trace')
  const ask = (atMs: number) => {
    say((w) => askingMoment(w, atMs))
    if (viewStore.getState().desk !== 'trace') openDesk('trace')
  }
  return {
    className: open ? 'time-hanging asks' : 'time-hanging',
    onPointerDownCapture: (event: PointerEvent) => {
      pressed.current = { x: event.clientX, y: event.clientY }
    },
    onClick: (event: MouseEvent) => {
      const from = pressed.current
      pressed.current = null
      if (!open || !svg.current || !from) return
      if (Math.hypot(event.clientX - from.x, event.clientY - from.y) > STILL_PX) return
      const frame = makeFrame(svg.current.clientWidth, svg.current.clientHeight, MARGIN, '')
      const point = svgPoint(svg.current, event.clientX, event.clientY)
      const inside = point.x >= frame.left && point.x <= frame.right && point.y >= frame.top && point.y <= frame.bottom
      if (inside) ask(cursorAt(point, frame, axis))
    },
    onKeyDown: (event: KeyboardEvent) => {
      if (event.key.toLowerCase() !== 't' || event.ctrlKey || event.metaKey || event.altKey) return
      ask(axis.firstMs + cursor * axis.stepMs)
    },
  }
}

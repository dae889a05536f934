import { useEffect, useRef, useState } from 'react'

/** A place in pixels of the figure's svg. */
export type Point = { readonly x: number; readonly y: number }

export type DragCallbacks = {
  /** The button went down. */
  onStart?: (point: Point) => void
  /** The pointer moved while held. */
  onMove: (point: Point, start: Point) => void
  /** The button was let go. */
  onEnd?: (point: Point, start: Point) => void
  /** Escape, or the browser took the pointer away: put back what was there at the start. */
  onCancel?: (start: Point) => void
}

/** What a drag needs of a pointer event; a React pointer event on an svg element is one. */
export type DragEvent = {
  readonly pointerId: number
  readonly clientX: number
  readonly clientY: number
  readonly button: number
  readonly currentTarget: SVGElement
  preventDefault(): void
  stopPropagation(): void
}

export type DragHandlers = {
  onPointerDown: (event: DragEvent) => void
  onPointerMove: (event: DragEvent) => void
  onPointerUp: (event: DragEvent) => void
  onPointerCancel: (event: DragEvent) => void
  onLostPointerCapture: (event: DragEvent) => void
}

/** Where key presses are heard during a drag; the window on a page. */
export type KeyTarget = Pick<Window, 'addEventListener' | 'removeEventListener'>

/** A pointer's place in the pixels of the svg that holds the element, whatever its size on the screen. */
export function svgPoint(element: SVGElement, clientX: number, clientY: number): Point {
  const svg = element.ownerSVGElement ?? (element as SVGSVGElement)
  const m = svg.getScreenCTM()
  if (m === null) return { x: clientX, y: clientY }
  const det = m.a * m.d - m.b * m.c
  const dx = clientX - m.e
  const dy = clientY - m.f
  return { x: (m.d * dx - m.c * dy) / det, y: (m.a * dy - m.b * dx) / det }
}

/**
 * The handlers of one draggable element, with pointer capture: a drag goes on outside the figure and ends exactly once, in onEnd or
 * onCancel. Without React, so that it can be tried without a page.
 *
 * @param read  gives the present callbacks; read anew at every event.
 * @param keys  where Escape is heard.
 * @returns  the handlers, and stop(), which cancels a drag under way.
 */
export function createDrag(read: () => DragCallbacks, keys: () => KeyTarget): DragHandlers & { stop: () => void } {
  let held: { pointerId: number; start: Point; element: SVGElement } | null = null

  const onKeyDown = (event: KeyboardEvent) => {
    if (event.key !== 'Escape') return
    // the same Escape must not also close the editor that stands open beside the figure
    event.preventDefault()
    event.stopPropagation()
    stop()
  }
  const release = () => {
    const ended = held
    held = null
    keys().removeEventListener('keydown', onKeyDown, true)
    if (ended?.element.hasPointerCapture(ended.pointerId)) ended.element.releasePointerCapture(ended.pointerId)
    return ended
  }
  const stop = () => {
    if (held === null) return
    const ended = release()!
    read().onCancel?.(ended.start)
  }
  const isHeld = (event: DragEvent) => held !== null && held.pointerId === event.pointerId

  return {
    onPointerDown(event) {
      if (held !== null || event.button !== 0) return
      // keeps the page from selecting text; the focus that this also prevents is given by hand
      event.preventDefault()
      event.stopPropagation()
      const element = event.currentTarget
      element.focus({ preventScroll: true })
      element.setPointerCapture(event.pointerId)
      held = { pointerId: event.pointerId, start: svgPoint(element, event.clientX, event.clientY), element }
      keys().addEventListener('keydown', onKeyDown, true)
      read().onStart?.(held.start)
    },
    onPointerMove(event) {
      if (isHeld(event)) read().onMove(svgPoint(event.currentTarget, event.clientX, event.clientY), held!.start)
    },
    onPointerUp(event) {
      if (!isHeld(event)) return
      const ended = release()!
      read().onEnd?.(svgPoint(event.currentTarget, event.clientX, event.clientY), ended.start)
    },
    onPointerCancel(event) {
      if (isHeld(event)) stop()
    },
    onLostPointerCapture(event) {
      if (isHeld(event)) stop()
    },
    stop,
  }
}

/**
 * Makes an svg element draggable: spread what it returns on the element. Touch does not scroll there meanwhile. An element that
 * leaves the page during a drag cancels it.
 */
export function useDrag(callbacks: DragCallbacks): DragHandlers & { style: { touchAction: 'none' } } {
  const latest = useRef(callbacks)
  latest.current = callbacks
  const [{ stop, ...handlers }] = useState(() =>
    createDrag(
      () => latest.current,
      () => window,
    ),
  )
  useEffect(() => stop, [stop])
  return { ...handlers, style: { touchAction: 'none' } }
}

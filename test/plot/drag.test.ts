import { describe, expect, test } from 'vitest'
import { createDrag, svgPoint } from '../../src/plot/drag.ts'
import type { DragEvent, KeyTarget } from '../../src/plot/drag.ts'
import { createGesture } from '../../src/plot/gesture.ts'

/** An element of an svg that stands at (100, 50) on the screen, drawn at double size. */
function fakeElement() {
  const captured = new Set<number>()
  const svg = { getScreenCTM: () => ({ a: 2, b: 0, c: 0, d: 2, e: 100, f: 50 }) }
  const element = {
    ownerSVGElement: svg,
    focused: false,
    focus() {
      element.focused = true
    },
    setPointerCapture: (id: number) => captured.add(id),
    hasPointerCapture: (id: number) => captured.has(id),
    releasePointerCapture: (id: number) => captured.delete(id),
    captured,
  }
  return element
}

function setUp() {
  const log: string[] = []
  const element = fakeElement()
  const listeners = new Set<(event: KeyboardEvent) => void>()
  const keys = {
    addEventListener: (_: string, f: (event: KeyboardEvent) => void) => listeners.add(f),
    removeEventListener: (_: string, f: (event: KeyboardEvent) => void) => listeners.delete(f),
  } as unknown as KeyTarget
  const drag = createDrag(
    () => ({
      onStart: (p) => log.push(`start ${p.x},${p.y}`),
      onMove: (p, s) => log.push(`move ${p.x - s.x},${p.y - s.y}`),
      onEnd: (p) => log.push(`end ${p.x},${p.y}`),
      onCancel: (s) => log.push(`cancel ${s.x},${s.y}`),
    }),
    () => keys,
  )
  const at = (clientX: number, clientY: number, more: { pointerId?: number; button?: number } = {}): DragEvent => ({
    pointerId: 1,
    button: 0,
    clientX,
    clientY,
    currentTarget: element as unknown as SVGElement,
    preventDefault() {},
    stopPropagation() {},
    ...more,
  })
  const press = (key: string) => {
    for (const f of [...listeners]) f({ key, preventDefault() {}, stopPropagation() {} } as unknown as KeyboardEvent)
  }
  return { log, element, listeners, drag, at, press }
}

describe('createDrag', () => {
  test('reports start, moves and end once each, in pixels of the svg', () => {
    const { log, element, drag, at, listeners } = setUp()
    drag.onPointerDown(at(120, 70))
    expect([...element.captured]).toEqual([1])
    expect(element.focused).toBe(true)
    drag.onPointerMove(at(140, 74))
    drag.onPointerUp(at(150, 74))
    drag.onLostPointerCapture(at(150, 74))
    drag.onPointerMove(at(160, 74))
    expect(log).toEqual(['start 10,10', 'move 10,2', 'end 25,12'])
    expect(element.captured.size).toBe(0)
    expect(listeners.size).toBe(0)
  })

  test('Escape cancels and what follows is not heard', () => {
    const { log, drag, at, press, listeners } = setUp()
    drag.onPointerDown(at(120, 70))
    press('a')
    press('Escape')
    drag.onPointerMove(at(140, 70))
    drag.onPointerUp(at(140, 70))
    expect(log).toEqual(['start 10,10', 'cancel 10,10'])
    expect(listeners.size).toBe(0)
  })

  test('a pointer taken away by the browser cancels', () => {
    for (const name of ['onPointerCancel', 'onLostPointerCapture'] as const) {
      const { log, drag, at } = setUp()
      drag.onPointerDown(at(120, 70))
      drag[name](at(120, 70))
      expect(log).toEqual(['start 10,10', 'cancel 10,10'])
    }
  })

  test('other buttons and second fingers are not heard', () => {
    const { log, drag, at } = setUp()
    drag.onPointerDown(at(120, 70, { button: 2 }))
    expect(log).toEqual([])
    drag.onPointerDown(at(120, 70))
    drag.onPointerDown(at(200, 70, { pointerId: 2 }))
    drag.onPointerMove(at(220, 70, { pointerId: 2 }))
    drag.onPointerUp(at(220, 70, { pointerId: 2 }))
    expect(log).toEqual(['start 10,10'])
  })

  test('stop cancels a drag under way and otherwise does nothing', () => {
    const { log, drag, at } = setUp()
    drag.stop()
    drag.onPointerDown(at(120, 70))
    drag.stop()
    drag.stop()
    expect(log).toEqual(['start 10,10', 'cancel 10,10'])
  })
})

describe('svgPoint', () => {
  test('undoes scaling, turning and shifting of the figure', () => {
    const m = { a: 0.6, b: 0.8, c: -0.8, d: 0.6, e: 30, f: -10 }
    const element = { ownerSVGElement: { getScreenCTM: () => m } } as unknown as SVGElement
    const p = svgPoint(element, m.a * 7 + m.c * 3 + m.e, m.b * 7 + m.d * 3 + m.f)
    expect(p.x).toBeCloseTo(7, 12)
    expect(p.y).toBeCloseTo(3, 12)
  })
})

describe('createGesture', () => {
  function gestureOn(initial: number, withCancel = true) {
    const log: string[] = []
    const state = { value: initial }
    const gesture = createGesture<number>(() => ({
      value: state.value,
      fromDrag: (p) => p.x,
      fromKey: (_, v) => v,
      same: Object.is,
      onChange: (v) => {
        state.value = v
        log.push(`change ${v}`)
      },
      onChangeStart: () => log.push('start'),
      onChangeEnd: () => log.push('end'),
      ...(withCancel ? { onChangeCancel: () => log.push('cancel') } : {}),
    }))
    return { log, state, gesture }
  }

  test('one gesture is start, changes and end; a repeated value is told once', () => {
    const { log, gesture } = gestureOn(5)
    gesture.begin()
    for (const v of [5, 6, 6, 7]) gesture.change(v)
    gesture.end()
    expect(log).toEqual(['start', 'change 6', 'change 7', 'end'])
  })

  test('a click that moves nothing tells nothing', () => {
    const { log, gesture } = gestureOn(5)
    gesture.begin()
    gesture.change(5)
    gesture.end()
    gesture.begin()
    gesture.cancel()
    expect(log).toEqual([])
  })

  test('cancelling puts back the value of the start', () => {
    const { log, state, gesture } = gestureOn(5)
    gesture.begin()
    gesture.change(9)
    gesture.cancel()
    expect(state.value).toBe(5)
    expect(log).toEqual(['start', 'change 9', 'change 5', 'cancel'])
  })

  test('without onChangeCancel the cancelled gesture ends', () => {
    const { log, gesture } = gestureOn(5, false)
    gesture.begin()
    gesture.change(9)
    gesture.cancel()
    expect(log).toEqual(['start', 'change 9', 'change 5', 'end'])
  })
})

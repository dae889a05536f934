import { useRef } from 'react'
import type { FocusEvent, KeyboardEvent } from 'react'
import { useDrag } from './drag.ts'
import type { Point } from './drag.ts'
import { sliderKey } from './slider-keys.ts'
import type { SliderKey } from './slider-keys.ts'

/**
 * How a part tells of a change. One gesture, a drag or one held key, is onChangeStart, any number of onChange, and then onChangeEnd
 * or onChangeCancel once: one step of undo. A click that moves nothing calls none of them.
 */
export type ChangeHandlers<T> = {
  onChange: (value: T) => void
  onChangeStart?: () => void
  onChangeEnd?: () => void
  /** Called after onChange has already put the value of the start back; without it onChangeEnd is called instead. */
  onChangeCancel?: () => void
}

export type GestureOptions<T> = ChangeHandlers<T> & {
  value: T
  /** The value for a pointer that went from start to point, beginning at startValue. */
  fromDrag: (point: Point, start: Point, startValue: T) => T
  /** The value after a key. */
  fromKey: (key: SliderKey, value: T) => T
  same: (a: T, b: T) => boolean
}

/** Bookkeeping of gestures on one value, without React and without events. */
export type GestureSession<T> = {
  begin: () => void
  change: (value: T) => void
  end: () => void
  cancel: () => void
  /** The value with which the gesture began. */
  startValue: () => T
}

/** One gesture at a time; the start is told with the first real change. */
export function createGesture<T>(read: () => GestureOptions<T>): GestureSession<T> {
  let startValue = read().value
  let lastValue = startValue
  let told = false
  return {
    begin() {
      startValue = read().value
      lastValue = startValue
      told = false
    },
    change(value) {
      if (read().same(value, lastValue)) return
      if (!told) read().onChangeStart?.()
      told = true
      lastValue = value
      read().onChange(value)
    },
    end() {
      if (told) read().onChangeEnd?.()
      told = false
    },
    cancel() {
      if (!told) return
      told = false
      const { onChange, onChangeCancel, onChangeEnd } = read()
      onChange(startValue)
      if (onChangeCancel) onChangeCancel()
      else onChangeEnd?.()
    },
    startValue: () => startValue,
  }
}

/** Props that make an svg element a slider for pointer and keyboard; spread them on it. */
export function useGesture<T>(options: GestureOptions<T>) {
  const latest = useRef(options)
  latest.current = options
  const session = useRef<GestureSession<T> | null>(null)
  session.current ??= createGesture(() => latest.current)
  const gesture = session.current
  const keyHeld = useRef(false)

  const drag = useDrag({
    onStart: () => {
      endKeys()
      gesture.begin()
    },
    onMove: (point, start) => gesture.change(latest.current.fromDrag(point, start, gesture.startValue())),
    onEnd: (point, start) => {
      gesture.change(latest.current.fromDrag(point, start, gesture.startValue()))
      gesture.end()
    },
    onCancel: () => gesture.cancel(),
  })
  const endKeys = () => {
    if (!keyHeld.current) return
    keyHeld.current = false
    gesture.end()
  }

  return {
    ...drag,
    tabIndex: 0,
    onKeyDown: (event: KeyboardEvent<SVGElement>) => {
      const key = sliderKey(event)
      if (key === null) return
      event.preventDefault()
      event.stopPropagation()
      if (!keyHeld.current) {
        keyHeld.current = true
        gesture.begin()
      }
      gesture.change(latest.current.fromKey(key, latest.current.value))
    },
    onKeyUp: (event: KeyboardEvent<SVGElement>) => {
      if (sliderKey(event) !== null || event.key === 'Shift') endKeys()
    },
    onBlur: (_event: FocusEvent<SVGElement>) => endKeys(),
  }
}

import { useLayoutEffect, useRef, useState } from 'react'
import type { RefObject } from 'react'

/**
 * The size of an element that fills its parent, followed by the one ResizeObserver of a figure.
 *
 * @returns  a ref for the element, and its content size in whole pixels, 0 × 0 before the first measurement.
 */
export function useParentSize<E extends HTMLElement>(): { ref: RefObject<E | null>; width: number; height: number } {
  const ref = useRef<E>(null)
  const [size, setSize] = useState({ width: 0, height: 0 })
  useLayoutEffect(() => {
    const element = ref.current
    if (element === null) return
    const measure = () => {
      const width = Math.floor(element.clientWidth)
      const height = Math.floor(element.clientHeight)
      setSize((old) => (old.width === width && old.height === height ? old : { width, height }))
    }
    measure()
    const observer = new ResizeObserver(measure)
    observer.observe(element)
    return () => observer.disconnect()
  }, [])
  return { ref, ...size }
}

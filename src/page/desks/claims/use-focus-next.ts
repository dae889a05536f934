/** Where the keyboard goes when what it stood on is gone or has moved. */
import { type RefObject, useCallback, useEffect, useReducer, useRef } from 'react'

type Find = (desk: HTMLElement) => HTMLElement | null | undefined

/** Focuses what is found once the change that was just made is on the page. */
export type FocusNext = (find: Find) => void

export function useFocusNext(desk: RefObject<HTMLElement | null>): FocusNext {
  const wanted = useRef<Find | null>(null)
  // what changed may be a part of the desk alone: the desk itself is drawn again with it, so that the effect runs
  const [, draw] = useReducer((count: number) => count + 1, 0)
  useEffect(() => {
    const find = wanted.current
    wanted.current = null
    if (find && desk.current) find(desk.current)?.focus()
  })
  return useCallback((find) => {
    wanted.current = find
    draw()
  }, [])
}

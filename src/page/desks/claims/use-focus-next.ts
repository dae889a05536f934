/** Where the keyboard goes when what it stood on is gone or has moved. */
import { type RefObject, useCallback, useEffect, useRef } from 'react'

type Find = (desk: HTMLElement) => HTMLElement | null | undefined

/** Focuses what is found once the change that was just made is on the page. */
export type FocusNext = (find: Find) => void

export function useFocusNext(desk: RefObject<HTMLElement | null>): FocusNext {
  const wanted = useRef<Find | null>(null)
  useEffect(() => {
    const find = wanted.current
    wanted.current = null
    if (find && desk.current) find(desk.current)?.focus()
  })
  return useCallback((find) => {
    wanted.current = find
  }, [])
}

import { look, type View, viewStore } from '../../state/view.ts'

export type DeskId = NonNullable<View['desk']>

/** Where a desk begins on the page. */
export const DESKS_ID = 'desks'

/** Opens a desk and brings it into sight; the keyboard stays where it is. */
export function openDesk(id: DeskId): void {
  look({ desk: id })
  // it is drawn by the next frame
  requestAnimationFrame(() => {
    const still = window.matchMedia('(prefers-reduced-motion: reduce)').matches
    document.getElementById(DESKS_ID)?.scrollIntoView({ block: 'start', behavior: still ? 'auto' : 'smooth' })
  })
}

export function closeDesk(): void {
  const { open } = viewStore.getState()
  // an editor of the desk goes with it
  const own = open !== null && ['trace-', 'trade-off-', 'claim-', 'write-up-'].some((desk) => open.startsWith(desk))
  look({ desk: null, ...(own ? { open: null } : {}) })
}

/** What a key asks of a slider: so many steps, or one of its ends. */
export type SliderKey = { kind: 'steps'; steps: number } | { kind: 'end'; end: 'min' | 'max' }

/**
 * The slider's reading of a key: right and up one step on, left and down one step back, with shift or the page keys ten, Home and End
 * the ends. Null for every other key, and with Ctrl, Alt or Meta held, which belong to the page and the browser.
 */
export function sliderKey(event: {
  readonly key: string
  readonly shiftKey: boolean
  readonly ctrlKey: boolean
  readonly altKey: boolean
  readonly metaKey: boolean
}): SliderKey | null {
  if (event.ctrlKey || event.altKey || event.metaKey) return null
  const size = event.shiftKey ? 10 : 1
  switch (event.key) {
    case 'ArrowRight':
    case 'ArrowUp':
      return { kind: 'steps', steps: size }
    case 'ArrowLeft':
    case 'ArrowDown':
      return { kind: 'steps', steps: -size }
    case 'PageUp':
      return { kind: 'steps', steps: 10 }
    case 'PageDown':
      return { kind: 'steps', steps: -10 }
    case 'Home':
      return { kind: 'end', end: 'min' }
    case 'End':
      return { kind: 'end', end: 'max' }
    default:
      return null
  }
}

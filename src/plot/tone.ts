/**
 * The colours of the page by what they say; each is the custom property of that name (--before, --after …). Conditions have their own
 * names, for example 'condition-1'.
 */
export type Tone =
  | 'before'
  | 'after'
  | 'taken-out'
  | 'ink'
  | 'quiet'
  | 'rule'
  | 'paper'
  | 'sheet'
  | 'band'
  | 'kept'
  | 'over'
  | `condition-${number}`

/** The colour of lines and areas. */
export function toneColor(tone: Tone): string {
  return `var(--${tone})`
}

/** The colour of text in that tone: where the line colour is too pale to be read, the page sets a darker one (--before-text …). */
export function toneTextColor(tone: Tone): string {
  if (tone === 'before') return 'var(--before-text, var(--quiet))'
  return `var(--${tone}-text, var(--${tone}))`
}

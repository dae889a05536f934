/** Dash patterns that stay apart on a line one and a half pixels wide, in the order in which stages take them. */
const DASHES = ['1.5 3', '6 3', '7 3 1.5 3', '12 3', '7 3 1.5 3 1.5 3', '3 2.5'] as const

/**
 * How the line of a stage is dashed, in the frequency figure and in the chain table.
 *
 * @param index  the stage's place in the chain, counted from 0; from the seventh on the patterns repeat.
 * @returns  a value for stroke-dasharray.
 */
export function stageDash(index: number): string {
  return DASHES[index % DASHES.length]
}

import type { Frame } from './frame.ts'

/** 'unseen': the result there leans on samples that are not in the data. 'outside': time outside the epoch, lighter. */
export type HatchKind = 'unseen' | 'outside'

/** The id of a figure's hatch pattern, for fill={`url(#…)`}. */
export function hatchId(frame: Pick<Frame, 'id'>, kind: HatchKind): string {
  return `${frame.id}-${kind}`
}

/** The two patterns, told apart by direction, spacing and weight, not by colour alone. FigureFrame puts them into its defs. */
export function HatchPatterns({ frame }: { frame: Pick<Frame, 'id'> }) {
  return (
    <>
      <pattern
        id={hatchId(frame, 'unseen')}
        width={5}
        height={5}
        patternUnits="userSpaceOnUse"
        patternTransform="rotate(-45)"
      >
        <path d="M0,2.5H5" fill="none" stroke="var(--quiet)" strokeWidth={1} strokeOpacity={0.55} />
      </pattern>
      <pattern
        id={hatchId(frame, 'outside')}
        width={7}
        height={7}
        patternUnits="userSpaceOnUse"
        patternTransform="rotate(45)"
      >
        <path d="M3.5,0V7" fill="none" stroke="var(--rule)" strokeWidth={1} />
      </pattern>
    </>
  )
}

export type HatchedZoneProps = {
  frame: Frame
  kind: HatchKind
  /** Left and right end in pixels, either order; cut to the plot area. */
  fromPx: number
  toPx: number
}

/** An upright strip of the plot area filled with one of the patterns; nothing where it has no width. */
export function HatchedZone({ frame, kind, fromPx, toPx }: HatchedZoneProps) {
  const left = Math.max(frame.left, Math.min(fromPx, toPx))
  const right = Math.min(frame.right, Math.max(fromPx, toPx))
  if (!(right > left)) return null
  return (
    <rect
      className={`plot-hatch plot-hatch-${kind}`}
      aria-hidden="true"
      pointerEvents="none"
      x={left}
      y={frame.top}
      width={right - left}
      height={frame.plotHeight}
      fill={`url(#${hatchId(frame, kind)})`}
    />
  )
}

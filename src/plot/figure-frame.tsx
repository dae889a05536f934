import { useId } from 'react'
import type { PointerEvent, ReactNode, Ref } from 'react'
import { svgPoint } from './drag.ts'
import type { Point } from './drag.ts'
import { makeFrame } from './frame.ts'
import type { Frame, Margin } from './frame.ts'
import { HatchPatterns } from './hatch.tsx'
import { useParentSize } from './parent-size.ts'

export type FigureFrameProps = {
  /** Accessible name of the figure. */
  title: string
  /** What it shows at present, in a sentence or two, for those who do not see it. */
  description: string
  /** Height of the svg, px. */
  height: number
  /** Width of the svg, px; without it the parent's width, followed as it changes. */
  width?: number
  margin: Margin
  /** True if the figure holds sliders: it is then a group, since an image hides what is in it. Default false. */
  interactive?: boolean
  /** Whether the plot area lies on a sheet; default true. */
  sheet?: boolean
  className?: string
  svgRef?: Ref<SVGSVGElement>
  /** The pointer's place over the plot area, in pixels of the svg; null when it leaves. */
  onHover?: (point: Point | null, frame: Frame) => void
  /** Draws the figure; called with its measures once they are known. */
  children: (frame: Frame) => ReactNode
}

/** The svg of a figure with its name, description, clip path and hatch patterns. */
export function FigureFrame(props: FigureFrameProps) {
  const { title, description, height, margin, interactive = false, sheet = true, className, svgRef, onHover } = props
  const parent = useParentSize<HTMLDivElement>()
  const id = `plot${useId().replace(/[^A-Za-z0-9_-]/g, '')}`
  const width = props.width ?? parent.width
  const frame = makeFrame(width, height, margin, id)
  const hover = (event: PointerEvent<SVGSVGElement>) => {
    const point = svgPoint(event.currentTarget, event.clientX, event.clientY)
    const inside = point.x >= frame.left && point.x <= frame.right && point.y >= frame.top && point.y <= frame.bottom
    onHover?.(inside ? point : null, frame)
  }
  return (
    <div ref={parent.ref} className="plot-parent" style={{ height }}>
      {width > 0 && (
        <svg
          ref={svgRef}
          className={['plot-figure', className].filter(Boolean).join(' ')}
          width={width}
          height={height}
          viewBox={`0 0 ${width} ${height}`}
          role={interactive ? 'group' : 'img'}
          aria-labelledby={`${id}-title`}
          aria-describedby={`${id}-desc`}
          onPointerMove={onHover && hover}
          onPointerLeave={onHover && (() => onHover(null, frame))}
        >
          {/* in an empty group of their own, because a title directly in the svg pops up as a tooltip over the whole figure */}
          <g>
            <title id={`${id}-title`}>{title}</title>
            <desc id={`${id}-desc`}>{description}</desc>
          </g>
          <defs>
            <clipPath id={`${id}-clip`}>
              <rect x={frame.left} y={frame.top} width={frame.plotWidth} height={frame.plotHeight} />
            </clipPath>
            <HatchPatterns frame={frame} />
          </defs>
          {sheet && (
            <rect
              className="plot-sheet"
              x={frame.left}
              y={frame.top}
              width={frame.plotWidth}
              height={frame.plotHeight}
              fill="var(--sheet)"
            />
          )}
          {props.children(frame)}
        </svg>
      )}
    </div>
  )
}

/** Cuts what it holds to the plot area: curves belong in it, handles and labels do not. */
export function Clipped({ frame, children }: { frame: Frame; children: ReactNode }) {
  return <g clipPath={`url(#${frame.id}-clip)`}>{children}</g>
}

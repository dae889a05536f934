/** Room around the plot area for axis labels, px. */
export type Margin = { readonly top: number; readonly right: number; readonly bottom: number; readonly left: number }

/** A figure's measures in pixels of its svg. Scales take their ranges from left, right, top and bottom. */
export type Frame = {
  readonly width: number
  readonly height: number
  /** The four edges of the plot area. */
  readonly left: number
  readonly right: number
  readonly top: number
  readonly bottom: number
  /** Width and height of the plot area. */
  readonly plotWidth: number
  readonly plotHeight: number
  /** Prefix of the ids of this figure's clip path and hatch patterns. */
  readonly id: string
}

/** The frame for a size and margins; a plot area too small for its margins keeps 1 px, so that scales stay defined. */
export function makeFrame(width: number, height: number, margin: Margin, id: string): Frame {
  const plotWidth = Math.max(1, width - margin.left - margin.right)
  const plotHeight = Math.max(1, height - margin.top - margin.bottom)
  return {
    width,
    height,
    left: margin.left,
    right: margin.left + plotWidth,
    top: margin.top,
    bottom: margin.top + plotHeight,
    plotWidth,
    plotHeight,
    id,
  }
}

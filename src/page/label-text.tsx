import type { ReactNode } from 'react'
import { DirectLabel } from '../plot/index.ts'
import { type DrawnLabel, ROW_PX } from './placed-labels.ts'

interface LabelTextsProps {
  labels: readonly DrawnLabel[]
  /** The score window in pixels: labels in it have a halo of its colour. */
  band?: readonly [number, number]
}

/** Labels that were given their places, each row with its halo. */
export function LabelTexts({ labels, band = [0, 0] }: LabelTextsProps) {
  return labels.flatMap((label) =>
    label.rows.map(({ strong, plain }, row) => (
      <DirectLabel
        key={`${label.id}/${row}`}
        x={label.x}
        y={label.y + (row - (label.rows.length - 1) / 2) * ROW_PX}
        tone={label.tone}
        anchor={label.anchor}
        {...(insideShare(label, band) > 0.98 ? { className: 'on-band' } : {})}
      >
        {strong ? <tspan className="plot-strong">{strong}</tspan> : null}
        {strong && plain ? ' ' : null}
        {plain}
      </DirectLabel>
    )),
  )
}

function insideShare({ box }: DrawnLabel, [from, to]: readonly [number, number]): number {
  return (Math.min(box.right, to) - Math.max(box.left, from)) / (box.right - box.left)
}

/** Marks and labels that the figure's description and its sliders already say. */
export function Unspoken({ children, className }: { children: ReactNode; className?: string }) {
  return (
    // biome-ignore lint/a11y/noAriaHiddenOnFocusable: a group of an svg takes no focus
    <g aria-hidden="true" className={className}>
      {children}
    </g>
  )
}

/** Title line of a figure: name, what it shows as tokens or words, and saving it as SVG or PNG with its caption. */
import { type ReactNode, type RefObject, useState } from 'react'
import { downloadBlob, figureToPng, figureToSvg, fontFaceCss } from '../plot/index.ts'

interface FigureHeadProps {
  title: string
  /** Words and switches beside the title. */
  children?: ReactNode
  /** The figure's svg, and the caption that names filter, data and score; both read when the user saves. */
  svg: RefObject<SVGSVGElement | null>
  caption: () => string
  fileName: string
}

export function FigureHead({ title, children, svg, caption, fileName }: FigureHeadProps) {
  const [open, setOpen] = useState(false)
  const [failure, setFailure] = useState<string | null>(null)
  const save = async (kind: 'svg' | 'png') => {
    setOpen(false)
    if (!svg.current) return
    try {
      const text = figureToSvg(svg.current, { title, caption: caption(), fontCss: await fontFaceCss() })
      downloadBlob(
        kind === 'svg' ? new Blob([text], { type: 'image/svg+xml' }) : await figureToPng(text, 2),
        `${fileName}.${kind}`,
      )
      setFailure(null)
    } catch (error) {
      setFailure(`The figure could not be saved: ${error instanceof Error ? error.message : String(error)}`)
    }
  }
  return (
    <div className="figure-head">
      <h2>{title}</h2>
      {children}
      <span className="end">
        {failure ? (
          <span role="alert" className="over">
            {failure}{' '}
          </span>
        ) : null}
        {open ? (
          <>
            <button type="button" className="word" onClick={() => void save('svg')} aria-label={`save ${title} as SVG`}>
              SVG
            </button>{' '}
            <button type="button" className="word" onClick={() => void save('png')} aria-label={`save ${title} as PNG`}>
              PNG
            </button>{' '}
          </>
        ) : null}
        <button
          type="button"
          className="plain save"
          aria-expanded={open}
          aria-label={`save ${title}`}
          onClick={() => setOpen(!open)}
        >
          save
        </button>
      </span>
    </div>
  )
}

/** A word in a figure's title line that switches between a few ways of looking. */
export function Switch<T extends string>(props: {
  value: T
  options: readonly T[]
  label: string
  onChange: (value: T) => void
  words?: Partial<Record<T, string>>
}) {
  const { value, options, label, onChange, words } = props
  const next = options[(options.indexOf(value) + 1) % options.length]
  return (
    <button
      type="button"
      className="token small"
      aria-label={`${label}: ${words?.[value] ?? value}; switch to ${words?.[next] ?? next}`}
      onClick={() => onChange(next)}
    >
      {words?.[value] ?? value}
    </button>
  )
}

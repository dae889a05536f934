/** Title line of a figure: name, what it shows as tokens or words, and saving it as SVG or PNG with its caption. */
import { type ReactNode, type RefObject, useContext, useEffect, useRef, useState } from 'react'
import { downloadBlob, figureToPng, figureToSvg, fontFaceCss } from '../plot/index.ts'
import { keep, type LiveFigure, MOST_KEPT, OnDesk, register } from './sheet-figures.ts'

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
  const [kept, setKept] = useState(false)
  const onDesk = useContext(OnDesk)
  const figure = useLiveFigure({ id: fileName, title, svg, caption })
  const putOnSheet = () => {
    setOpen(false)
    const done = keep(figure())
    setKept(done)
    setFailure(done ? null : `The sheet holds ${MOST_KEPT} figures from desks: take one off on the write-up desk.`)
  }
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
        {kept && !open ? (
          <span role="status" className="quiet">
            on the sheet of the write-up desk ·{' '}
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
            {onDesk ? (
              <>
                <button
                  type="button"
                  className="word"
                  onClick={putOnSheet}
                  aria-label={`put ${title} on the sheet of the write-up desk`}
                >
                  on the sheet
                </button>{' '}
              </>
            ) : null}
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

/** Lists the figure among those on the page for as long as it stands there; what is read of it is always the present. */
function useLiveFigure(figure: Pick<LiveFigure, 'id' | 'title'> & Pick<FigureHeadProps, 'svg' | 'caption'>) {
  const present = useRef(figure)
  present.current = figure
  const { id, title } = figure
  const [live] = useState(() => (): LiveFigure => {
    const { id: name, title: head } = present.current
    return { id: name, title: head, svg: () => present.current.svg.current, caption: () => present.current.caption() }
  })
  // biome-ignore lint/correctness/useExhaustiveDependencies: another name is another entry
  useEffect(() => register(live()), [live, id, title])
  return live
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

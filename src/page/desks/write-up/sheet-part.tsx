/** The figure sheet: figures of the page and those kept from desks, saved as one file. */
import { useState } from 'react'
import { useStore } from 'zustand'
import {
  downloadBlob,
  figurePage,
  figureSheet,
  figureToPng,
  fontFaceCss,
  letterOf,
  type SheetFigure,
} from '../../../plot/index.ts'
import { WordButton } from '../../fields.tsx'
import { dropKept, figureStore, inPageOrder, onPaper } from '../../sheet-figures.ts'

const FILE = 'sidelobe-figures'

interface SheetPartProps {
  /** Title of the sheet. */
  title: string
  /** The figures on the page are not those of the sentence yet: none is saved until they are. */
  stale: boolean
}

export function SheetPart({ title, stale }: SheetPartProps) {
  const { live, kept } = useStore(figureStore)
  const [left, setLeft] = useState<ReadonlySet<string>>(new Set())
  const [said, setSaid] = useState<{ words: string; failed: boolean } | null>(null)
  const present = inPageOrder(live)
  const chosen = [...present, ...kept].filter(({ id }) => !left.has(id))
  const toggle = (id: string) =>
    setLeft((before) => {
      const next = new Set(before)
      if (!next.delete(id)) next.add(id)
      return next
    })
  const drawn = (): SheetFigure[] =>
    chosen.flatMap((figure) => ('drawn' in figure ? [figure] : (onPaper(figure) ?? [])))
  const save = async (kind: 'svg' | 'png' | 'html') => {
    try {
      const figures = drawn()
      const faces = await fontFaceCss()
      const text = { title, fontCss: kind === 'html' ? `${faces}\n${serifRule()}` : faces }
      const blob =
        kind === 'html'
          ? new Blob([figurePage(figures, text)], { type: 'text/html' })
          : kind === 'svg'
            ? new Blob([figureSheet(figures, text)], { type: 'image/svg+xml' })
            : await figureToPng(figureSheet(figures, text), 2)
      downloadBlob(blob, `${FILE}.${kind}`)
      setSaid({ words: `saved as ${FILE}.${kind}`, failed: false })
    } catch (error) {
      const reason = error instanceof Error ? error.message : String(error)
      setSaid({ words: `The figures could not be saved: ${reason}`, failed: true })
    }
  }
  const none = chosen.length === 0 || stale
  const place = (id: string) => chosen.findIndex((figure) => figure.id === id)
  return (
    <section aria-label="Figures">
      <div className="figure-head">
        <h2>Figures</h2>
        <span className="end take">
          <span role="status" className={said?.failed ? 'over' : 'quiet'}>
            {said?.words}
          </span>
          <WordButton disabled={none} label="save the sheet as SVG" onPress={() => void save('svg')}>
            SVG
          </WordButton>
          <WordButton disabled={none} label="save the sheet as PNG" onPress={() => void save('png')}>
            PNG
          </WordButton>
          <WordButton disabled={none} label="save the sheet as a page to print" onPress={() => void save('html')}>
            page to print
          </WordButton>
        </span>
      </div>
      <p className="small quiet">
        On one sheet, in the colours of paper, with captions that name data, chain and score.
      </p>
      <fieldset className="sheet-choice">
        <legend className="visually-hidden">Figures of the sheet</legend>
        {present.map(({ id, title: name }) => (
          <Tick key={id} name={name} letter={place(id)} onChange={() => toggle(id)} />
        ))}
        {kept.map(({ id, title: name, caption }) => (
          <span key={id}>
            <Tick name={name} letter={place(id)} onChange={() => toggle(id)} hint={caption} />{' '}
            <WordButton label={`take ${name} off the sheet`} onPress={() => dropKept(id)}>
              take off
            </WordButton>
          </span>
        ))}
      </fieldset>
      <p className="small quiet">
        A figure of another desk comes onto the sheet by “save”, “on the sheet” beside its title, as it is at that
        moment. The page to print is a file that the browser’s print dialog turns into a PDF.
      </p>
    </section>
  )
}

/** Captions on paper are set in the page's serif face. */
function serifRule(): string {
  const serif = getComputedStyle(document.documentElement).getPropertyValue('--serif').trim()
  return `body { font-family: ${serif}; }`
}

function Tick(props: { name: string; letter: number; onChange: () => void; hint?: string }) {
  const { name, letter, onChange, hint } = props
  const on = letter >= 0
  return (
    <label className="check" title={hint}>
      <input type="checkbox" checked={on} onChange={onChange} /> <b aria-hidden="true">{on ? letterOf(letter) : ''}</b>{' '}
      {name}
    </label>
  )
}

/** The methods paragraph, as it reads or as the markup in which it is pasted. */
import { useState } from 'react'
import { PARAGRAPH_FILE, type WriteUpWords } from '../../../state/write-up.ts'
import type { Markup } from '../../../words/index.ts'
import { Choice } from '../../fields.tsx'
import { TakeText } from './take-text.tsx'

const MARKUPS: readonly { value: Markup; text: string }[] = [
  { value: 'text', text: 'plain text' },
  { value: 'markdown', text: 'Markdown' },
  { value: 'latex', text: 'LaTeX' },
]

const TYPES: Record<Markup, string> = { text: 'text/plain', markdown: 'text/markdown', latex: 'application/x-tex' }

interface ParagraphPartProps extends Pick<WriteUpWords, 'paragraph'> {
  /** It is not that of the sentence any more: it is not taken away until it is. */
  stale: boolean
}

export function ParagraphPart({ paragraph, stale }: ParagraphPartProps) {
  const [markup, setMarkup] = useState<Markup>('text')
  const text = paragraph[markup]
  return (
    <section aria-label="Methods paragraph">
      <div className="figure-head">
        <h2>Methods paragraph</h2>
        <Choice label="markup of the methods paragraph" value={markup} options={MARKUPS} onChange={setMarkup} />
        <TakeText
          what="the methods paragraph"
          text={stale ? null : text}
          fileName={PARAGRAPH_FILE[markup]}
          type={TYPES[markup]}
        />
      </div>
      <p className={markup === 'text' ? 'methods' : 'methods source'}>{text}</p>
      <p className="small quiet">
        Every number follows from the chain as designed. What the page cannot know is stated in the checklist below, and
        joins the paragraph; what nobody has stated is said to be so.
      </p>
    </section>
  )
}

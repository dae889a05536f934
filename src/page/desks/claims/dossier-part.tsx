/** The claims as one document for a co-author or an answer to reviewers. */
import { type RefObject, useState } from 'react'
import { useStore } from 'zustand'
import { downloadBlob, figureToSvg } from '../../../plot/index.ts'
import { dossierOf, unanswerable, unanswered } from '../../../state/claim-facts.ts'
import { claimStore } from '../../../state/claim-run.ts'
import type { Evaluation } from '../../../state/evaluation.ts'
import type { RecordedData } from '../../../state/recorded-data.ts'
import type { Workspace } from '../../../state/workspace.ts'
import { dossierHtml, dossierMarkdown } from '../../../words/index.ts'
import { WordButton } from '../../fields.tsx'
import { inLightTheme } from '../../light-theme.ts'

/** The figure of a claim as it stands on its card. */
export interface FigureSource {
  svg: RefObject<SVGSVGElement | null>
  caption: () => string
  /** Figures beside it, by what they show. */
  more: ReadonlyMap<string, RefObject<SVGSVGElement | null>>
}

interface DossierPartProps {
  workspace: Workspace
  evaluation: Evaluation
  data: RecordedData | null
  figures: ReadonlyMap<number, FigureSource>
}

export function DossierPart({ workspace, evaluation, data, figures }: DossierPartProps) {
  const left = useStore(claimStore, () => unanswered(workspace))
  const refused = useStore(claimStore, () => unanswerable(workspace, data).join(', '))
  const [said, setSaid] = useState<{ words: string; failed: boolean } | null>(null)
  const save = (kind: 'html' | 'md') => {
    try {
      const dossier = inLightTheme(() =>
        dossierOf(
          workspace,
          evaluation,
          data,
          ({ id }) => drawn('What would change it', figures.get(id)?.svg.current),
          ({ id }) =>
            [...(figures.get(id)?.more ?? [])].flatMap(([title, { current }]) => {
              const svg = drawn(title, current)
              return svg === null ? [] : [{ title, svg }]
            }),
        ),
      )
      const text = kind === 'html' ? dossierHtml(dossier) : dossierMarkdown(dossier)
      const name = `${fileName(workspace.claims.title)}.${kind}`
      downloadBlob(new Blob([text], { type: kind === 'html' ? 'text/html' : 'text/markdown' }), name)
      setSaid({ words: `saved as ${name}`, failed: false })
    } catch (error) {
      setSaid({
        words: `The dossier could not be written: ${error instanceof Error ? error.message : String(error)}`,
        failed: true,
      })
    }
  }
  return (
    <section className="dossier" aria-label="dossier">
      <div className="figure-head">
        <h2>Dossier</h2>
        <span className="told">
          every claim with its verdict, number, figure and reason, and every assumption they rest on
        </span>
      </div>
      <p className="actions">
        <WordButton disabled={left > 0} onPress={() => save('html')}>
          save as HTML
        </WordButton>
        <WordButton disabled={left > 0} onPress={() => save('md')}>
          save as Markdown
        </WordButton>
        <span role="status" className={said?.failed ? 'over' : 'quiet'}>
          {refused !== ''
            ? `No dossier while ${refused.includes(',') ? `claims ${refused} have` : `claim ${refused} has`} no answer: each says why.`
            : left > 0
              ? `${left === 1 ? '1 claim has' : `${left} claims have`} no complete answer yet.`
              : said?.words}
        </span>
      </p>
    </section>
  )
}

function drawn(title: string, svg: SVGSVGElement | null | undefined): string | null {
  return svg ? figureToSvg(svg, { title, caption: '', fontCss: '' }) : null
}

/** A title as the name of a file. */
function fileName(title: string): string {
  const name = title
    .normalize('NFC')
    .replace(/[^\p{L}\p{N}]+/gu, '-')
    .replace(/^-+|-+$/g, '')
    .slice(0, 60)
  return name === '' ? 'claims' : name
}

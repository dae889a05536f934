/** The reporting checklist: what recommendations ask for, what is reported, and who asks. */
import { look } from '../../../state/view.ts'
import type { Workspace } from '../../../state/workspace.ts'
import { checklistCsv, fieldOf, type WriteUpWords } from '../../../state/write-up.ts'
import type { ChecklistItem, PublishedSource } from '../../../words/index.ts'
import { TableHead } from '../table-head.tsx'
import { Statement } from './statement.tsx'
import { markWords, shortSource } from './source-words.ts'

interface ChecklistTableProps {
  words: WriteUpWords
  workspace: Workspace
}

export function ChecklistTable({ words, workspace }: ChecklistTableProps) {
  const { checklist } = words
  const sources = [...new Set(checklist.flatMap((item) => item.sources))]
  return (
    <section aria-label="Reporting checklist" className="write-up-part" tabIndex={-1}>
      <TableHead
        title="Reporting checklist"
        told={countWords(checklist)}
        what="the reporting checklist"
        fileName="reporting-checklist"
        csv={() => checklistCsv(words)}
      />
      <table className="words-table checklist">
        <caption className="visually-hidden">What recommendations ask a paper to report about filters</caption>
        <thead>
          <tr>
            <th scope="col">asked for</th>
            <th scope="col">what is reported</th>
            <th scope="col">by</th>
          </tr>
        </thead>
        <tbody>
          {checklist.map((item) => (
            <Row key={item.id} item={item} workspace={workspace} />
          ))}
        </tbody>
      </table>
      <Sources sources={sources} />
    </section>
  )
}

/** "16 of 27 stated, 4 do not apply, 7 not stated" */
export function countWords(checklist: readonly ChecklistItem[]): string {
  const count = (state: ChecklistItem['state']) => checklist.filter((item) => item.state === state).length
  const idle = count('does not apply')
  const parts = [`${count('stated')} of ${checklist.length} stated`, `${count('not stated')} not stated`]
  if (idle > 0) parts.push(`${idle} ${idle === 1 ? 'does' : 'do'} not apply`)
  return parts.join(', ')
}

function Row({ item, workspace }: { item: ChecklistItem; workspace: Workspace }) {
  const { id, state, words, token, sources } = item
  const field = fieldOf(item, workspace)
  const said = field ? (workspace.statements[field] ?? '') : ''
  // the token carries the user's words; where they are all that is reported, they are not said twice
  const own = field !== null && said !== '' && item.field === field
  return (
    <tr className={state === 'not stated' ? 'missing' : state === 'stated' ? undefined : 'idle'}>
      <th scope="row">{item.item}</th>
      <td>
        {own ? null : (
          <span className={state === 'not stated' ? 'not-stated' : undefined}>
            {state === 'does not apply' ? `does not apply: ${words}` : words}
          </span>
        )}
        {field ? <Statement field={field} said={said} /> : null}
        {token ? (
          <button
            type="button"
            className="word quiet-word"
            aria-label={
              token === 'add' ? `add a stage that states: ${item.item}` : `change in the protocol line: ${item.item}`
            }
            onClick={() => openAbove(token)}
          >
            {token === 'add' ? 'add a stage' : 'change'}
          </button>
        ) : null}
      </td>
      <td className="by">
        {sources.map((source, i) => (
          <span key={`${id}:${source.words}`}>
            {i > 0 ? '; ' : ''}
            <span title={source.words}>{shortSource(source)}</span>
          </span>
        ))}
      </td>
    </tr>
  )
}

/** Opens a token's editor in the protocol line and brings it into sight. */
function openAbove(token: string): void {
  look({ open: token })
  requestAnimationFrame(() => {
    const still = window.matchMedia('(prefers-reduced-motion: reduce)').matches
    document.querySelector('.top')?.scrollIntoView({ block: 'start', behavior: still ? 'auto' : 'smooth' })
  })
}

/** Where the short names of a table lead. */
export function Sources({ sources }: { sources: readonly PublishedSource[] }) {
  return (
    <p className="small quiet sources">
      {sources
        .filter(({ words, mark }) => words !== mark)
        .map(({ words, mark }) => `${words} (${markWords(mark)}).`)
        .join(' ')}
    </p>
  )
}

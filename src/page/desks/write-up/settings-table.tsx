/** Published settings, held against the chain: by the source that gives them. */
import { settingsCsv, type WriteUpWords } from '../../../state/write-up.ts'
import type { PublishedSetting, PublishedSource } from '../../../words/index.ts'
import { TableHead } from '../table-head.tsx'
import { markWords } from './source-words.ts'

export function SettingsTable({ words }: { words: WriteUpWords }) {
  const { settings, examples, caution } = words
  return (
    <section aria-label="Published settings" className="write-up-part" tabIndex={-1}>
      <TableHead
        title="Published settings"
        told="half-power points and slopes of all filters that the waveform has passed"
        what="the published settings"
        fileName="published-settings"
        csv={() => settingsCsv(words)}
      />
      <p className="small write-up-caution">{caution}</p>
      <table className="words-table settings">
        <caption className="visually-hidden">Published settings and what the chain has of each</caption>
        <thead>
          <tr>
            <th scope="col">about</th>
            <th scope="col">asked</th>
            <th scope="col">the chain</th>
            <th scope="col">verdict</th>
          </tr>
        </thead>
        {bySource(settings).map(({ source, rows }) => (
          <tbody key={source.words}>
            <tr className="source-row">
              <th scope="rowgroup" colSpan={4}>
                {source.words} <span className="quiet">({markWords(source.mark)})</span>
              </th>
            </tr>
            {rows.map(({ id, about, requirement, stages, found, verdict, byHowMuch }) => (
              <tr key={id}>
                <td>{about}</td>
                <th scope="row">{requirement}</th>
                <td>
                  {found}
                  {stages === 'amplifier filters' ? <span className="quiet"> (amplifier alone)</span> : null}
                </td>
                <td className={verdict === 'kept' ? 'kept' : verdict === 'not kept' ? 'over' : 'quiet'}>
                  {verdict}
                  {byHowMuch ? `: ${byHowMuch.words}` : ''}
                </td>
              </tr>
            ))}
          </tbody>
        ))}
      </table>
      {examples.map(({ id, about, words: told, source }) => (
        <p key={id} className="small quiet sources">
          For comparison, not checked ({about}): {told} {source.words} ({markWords(source.mark)}).
        </p>
      ))}
    </section>
  )
}

/** Rows under their source, in the order in which the sources first appear. */
export function bySource(
  settings: readonly PublishedSetting[],
): { source: PublishedSource; rows: readonly PublishedSetting[] }[] {
  const sources = new Map(settings.map(({ source }) => [source.words, source]))
  return [...sources.values()].map((source) => ({
    source,
    rows: settings.filter((setting) => setting.source.words === source.words),
  }))
}

import { renderToStaticMarkup } from 'react-dom/server'
import { describe, expect, test } from 'vitest'
import { countWords } from '../../../src/page/desks/write-up/checklist-table.tsx'
import { beginning } from '../../../src/page/desks/write-up/code-part.tsx'
import { bySource } from '../../../src/page/desks/write-up/settings-table.tsx'
import { shortSource } from '../../../src/page/desks/write-up/source-words.ts'
import { WriteUpDesk } from '../../../src/page/desks/write-up/write-up-desk.tsx'
import { evaluate } from '../../../src/state/evaluate.ts'
import { SCENARIOS, type Workspace, workspaceOf } from '../../../src/state/workspace.ts'
import { stating, writeUpFacts, writeUpWords } from '../../../src/state/write-up.ts'

const scenarios = SCENARIOS.map((scenario) => workspaceOf(scenario))

function evaluated(workspace: Workspace) {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems[0].message)
  return outcome.evaluation
}

const wordsOf = (workspace: Workspace) => writeUpWords(writeUpFacts(workspace, evaluated(workspace)))

/** As React writes text into HTML. */
const escaped = (text: string) =>
  text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;')
    .replaceAll("'", '&#x27;')

function desk(workspace: Workspace): string {
  const shown = { evaluation: evaluated(workspace), of: workspace, problems: [], stale: false, working: false }
  return renderToStaticMarkup(<WriteUpDesk workspace={workspace} shown={shown} caption={() => ''} />)
}

describe('the desk', () => {
  test.each(scenarios.map((workspace) => [workspace.title, workspace] as const))(
    'prints paragraph, every item and every setting as the core says them: %s',
    (_, workspace) => {
      const html = desk(workspace)
      const { paragraph, checklist, settings, caution } = wordsOf(workspace)
      expect(html).not.toMatch(/NaN|Infinity|undefined/)
      for (const words of [paragraph.text, caution, countWords(checklist)]) expect(html).toContain(escaped(words))
      for (const { item, words } of checklist) {
        expect(html).toContain(escaped(item))
        expect(html).toContain(escaped(words))
      }
      for (const { requirement, found, verdict } of settings)
        for (const words of [requirement, found, verdict]) expect(html).toContain(escaped(words))
    },
  )

  test('what the user says stands in the paragraph and, once, in its row', () => {
    const html = desk(stating(scenarios[0], 'coefficients', 'Supplement <S1>'))
    const [before, rows] = html.split('Coefficients that do not depend on software')
    expect(before).toContain('Filter coefficients: Supplement &lt;S1&gt;.')
    const row = rows.slice(0, rows.indexOf('</tr>'))
    expect(row).toContain('>Supplement &lt;S1&gt;</button>')
    expect(row.match(/>[^<]*Supplement &lt;S1&gt;/g)).toHaveLength(1)
    expect(row).not.toContain('not stated')
  })
})

describe('its words', () => {
  test('count the items by what is known of them', () => {
    const items = (['stated', 'stated', 'not stated', 'does not apply'] as const).map((state, i) => ({
      ...{ id: `${i}`, item: '', sources: [], state, words: '' },
    }))
    expect(countWords(items)).toBe('2 of 4 stated, 1 not stated, 1 does not apply')
    expect(countWords(items.slice(0, 2))).toBe('2 of 2 stated, 0 not stated')
  })

  test('name a source up to its year, with the mark that says how surely it is quoted', () => {
    const words = 'Picton et al. 2000, Psychophysiology 37:127–152'
    expect(shortSource({ words, mark: 'from memory (medium)' })).toBe('Picton et al. 2000 (from memory, medium)')
    expect(shortSource({ words: 'common practice', mark: 'common practice' })).toBe('common practice')
  })

  test('put every setting under its source, once', () => {
    const { settings } = wordsOf(scenarios[0])
    const groups = bySource(settings)
    expect(groups.flatMap(({ rows }) => rows.map(({ id }) => id)).sort()).toEqual(settings.map(({ id }) => id).sort())
    expect(new Set(groups.map(({ source }) => source.words)).size).toBe(groups.length)
  })

  test('show the beginning of long code, in whole lines', () => {
    const line = `${'x'.repeat(99)}\n`
    expect(beginning(line.repeat(10))).toBe(line.repeat(10))
    const shown = beginning(line.repeat(1000))
    expect(shown.length).toBeLessThanOrEqual(60_000)
    expect(shown).toBe(line.repeat(shown.length / 100))
  })
})

import { readFileSync } from 'node:fs'
import fc from 'fast-check'
import { afterEach, describe, expect, test } from 'vitest'
import { designChain } from '../../src/filter/index.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import { SOFTWARE_VERSION } from '../../src/state/software-version.ts'
import { endGesture, redo, say, undo, workspaceStore } from '../../src/state/store.ts'
import {
  DIFFERENCE,
  readWorkspace,
  SCENARIOS,
  startWorkspace,
  type Workspace,
  workspaceOf,
} from '../../src/state/workspace.ts'
import {
  checklistCsv,
  CODE_FILE,
  type CodeFormat,
  codeQuestion,
  exportedCode,
  fieldOf,
  MAX_STATEMENT,
  settingsCsv,
  stating,
  writeUpFacts,
  writeUpWords,
} from '../../src/state/write-up.ts'
import { coefficientsCsv, coefficientsJson, STATEMENT_FIELDS, type StatementField } from '../../src/words/index.ts'

const first = workspaceOf(SCENARIOS[0])

function factsOf(workspace: Workspace) {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems[0].message)
  return writeUpFacts(workspace, outcome.evaluation)
}

/** As if the first scenario's waveform had been recorded. */
const recorded = (workspace: Workspace) => ({ ...factsOf(workspace), source: 'recorded' as const })

describe('the facts', () => {
  test('take the epoch from the samples: 701 of them from −400 to 1000 ms at 500 Hz', () => {
    const { epoch, samplingRateHz, softwareVersion } = factsOf(first)
    expect(epoch).toEqual({ fromMs: -400, toMs: 1000, samples: 701 })
    expect(samplingRateHz).toBe(500)
    expect(softwareVersion).toBe(SOFTWARE_VERSION)
  })

  test('hold no epoch where there is no sample', () => {
    expect(writeUpFacts(first, { samplingRateHz: 500, timesMs: new Float64Array(0) })).not.toHaveProperty('epoch')
  })

  test('say that a difference is of two conditions', () => {
    const { shown } = first
    const [one, two] = ['rare targets', 'frequent standards']
    const difference: Workspace = {
      ...first,
      shown: { ...shown, difference: { first: one, second: two }, chosen: DIFFERENCE },
    }
    expect(factsOf(difference)).toMatchObject({ ofTwoConditions: true, waveform: `the difference ${one} minus ${two}` })
    expect(factsOf(first)).not.toHaveProperty('ofTwoConditions')
  })

  test('take from the claims that a recording had passed no other filter, where the user has said so', () => {
    const axis = { samplingRateHz: 250, timesMs: Float64Array.of(0, 4) }
    const source = { kind: 'recorded' as const, fileName: 'a.csv', fileId: 'a', reading: {} }
    const saying = (filteredBefore: Workspace['claims']['filteredBefore'], on = source as Workspace['source']) =>
      writeUpFacts({ ...first, source: on, claims: { ...first.claims, filteredBefore } }, axis).noOtherFilters === true
    expect(saying('as stated')).toBe(true)
    expect(saying('not known')).toBe(false)
    expect(saying(null)).toBe(false)
    expect(saying('as stated', first.source)).toBe(false)
  })

  test('name the version of the package', () => {
    const text = readFileSync(new URL('../../package.json', import.meta.url), 'utf8')
    expect(SOFTWARE_VERSION).toBe((JSON.parse(text) as { version: string }).version)
  })
})

describe('stating a field', () => {
  const field: StatementField = 'reference'

  test('puts the words into paragraph and checklist, and blank text takes them out again', () => {
    const said = stating(first, field, 'Average of both mastoids')
    expect(writeUpWords(recorded(said)).paragraph.text).toContain('Reference: Average of both mastoids.')
    const item = writeUpWords(recorded(said)).checklist.find(({ id }) => id === field)
    expect(item).toMatchObject({ state: 'stated', words: 'Average of both mastoids' })
    expect(stating(said, field, ' \n ').statements).toEqual({})
    expect(writeUpWords(recorded(first)).checklist.find(({ id }) => id === field)?.state).toBe('not stated')
  })

  test('changes nothing where nothing is said anew', () => {
    const said = stating(first, field, 'Cz')
    expect(stating(said, field, 'Cz')).toBe(said)
    expect(stating(first, field, '  ')).toBe(first)
    expect(first.statements).toEqual({})
  })

  test('always leaves a workspace that can be read back, however long or odd the words', () => {
    fc.assert(
      fc.property(
        fc.array(
          fc.tuple(
            fc.constantFrom(...STATEMENT_FIELDS.map((entry) => entry.field)),
            fc.oneof(fc.string({ maxLength: 40 }), fc.string({ minLength: MAX_STATEMENT - 5, maxLength: 1200 })),
          ),
          { maxLength: 15 },
        ),
        (said) => {
          const workspace = said.reduce((kept, [key, text]) => stating(kept, key, text), first)
          expect(readWorkspace(JSON.parse(JSON.stringify(workspace)))).toEqual({ ok: true, workspace })
        },
      ),
      { numRuns: 50 },
    )
  })

  test('typed in one field is one step of undo, another field another', () => {
    const type = (key: StatementField, text: string) => say((w) => stating(w, key, text), `statement:${key}`)
    for (const text of ['C', 'Cz']) type('reference', text)
    for (const text of ['n', 'no', 'none']) type('detrending', text)
    undo()
    expect(workspaceStore.getState().workspace.statements).toEqual({ reference: 'Cz' })
    undo()
    expect(workspaceStore.getState().workspace.statements).toEqual({})
    redo()
    expect(workspaceStore.getState().workspace.statements).toEqual({ reference: 'Cz' })
  })

  afterEach(() => {
    endGesture()
    say(startWorkspace)
    workspaceStore.temporal.getState().clear()
  })
})

describe('the field of an item', () => {
  test('is its own, or that of a statement which the paragraph still carries', () => {
    // an amplifier stage states the item by itself; words from before it came still stand in the paragraph
    const said = stating(first, 'amplifier', 'the maker’s handbook, page 7')
    const words = writeUpWords(factsOf(said))
    expect(words.paragraph.text).toContain('the maker’s handbook, page 7')
    const item = words.checklist.find(({ id }) => id === 'amplifier')
    if (!item) throw new Error('the checklist has no item for the amplifier')
    expect(item.field).toBeUndefined()
    expect(fieldOf(item, said)).toBe('amplifier')
    expect(fieldOf(item, first)).toBeNull()
    expect(fieldOf({ id: 'reference', field: 'reference' }, first)).toBe('reference')
    expect(fieldOf({ id: 'sampling-rate' }, said)).toBeNull()
  })

  test('exists for every statement that there is, so that none is stuck in the paragraph', () => {
    const said = STATEMENT_FIELDS.reduce((kept, { field }) => stating(kept, field, `about ${field}`), first)
    for (const facts of [factsOf(said), recorded(said)]) {
      const fields = writeUpWords(facts).checklist.map((item) => fieldOf(item, said))
      for (const { field } of STATEMENT_FIELDS) expect(fields).toContain(field)
    }
  })
})

describe('code', () => {
  const question = codeQuestion(factsOf(first), 'python')
  const chain = designChain(first.chain, 500)

  test('each format is the writer’s own text for the chain of the workspace', () => {
    expect(exportedCode({ ...question, format: 'json' })).toBe(coefficientsJson(chain))
    expect(exportedCode({ ...question, format: 'csv' })).toBe(coefficientsCsv(chain))
    expect(exportedCode(question)).toContain('from scipy import signal')
    expect(exportedCode({ ...question, format: 'octave' })).toMatch(/^function y = sidelobe_chain\(/)
    expect(exportedCode({ ...question, format: 'r' })).toContain('stats::filter')
    expect(exportedCode({ ...question, format: 'julia' })).toContain('function apply_chain')
  })

  test('another chain, rate or extent is other code, though a plan is remembered', () => {
    const texts = [
      question,
      { ...question, extent: 'epochs' as const },
      { ...question, samplingRateHz: 1000 },
      { ...question, chain: question.chain.slice(0, 2) },
      question,
    ].map(exportedCode)
    expect(new Set(texts).size).toBe(4)
    expect(texts[4]).toBe(texts[0])
  })

  test('file names fit their languages: Octave wants a function in a file of its name', () => {
    const ends: Record<CodeFormat, RegExp> = {
      ...{ python: /\.py$/, octave: /^sidelobe_chain\.m$/, r: /\.R$/, julia: /\.jl$/, json: /\.json$/, csv: /\.csv$/ },
    }
    for (const [format, name] of Object.entries(CODE_FILE)) expect(name).toMatch(ends[format as CodeFormat])
  })
})

describe('tables as files', () => {
  const words = writeUpWords(recorded(first))

  test('the checklist has a line for each item, with its state and its sources in full', () => {
    const lines = checklistCsv(words).trimEnd().split('\r\n')
    expect(lines).toHaveLength(1 + words.checklist.length)
    expect(lines[0]).toBe('item,state,what is reported,asked for by')
    const reference = lines.find((line) => line.startsWith('Reference and'))
    expect(reference).toBe('Reference and re-referencing,not stated,not stated,common practice (common practice)')
  })

  test('the settings have a line each, amounts with full digits, and the caution', () => {
    const lines = settingsCsv(words).trimEnd().split('\r\n')
    expect(lines).toHaveLength(1 + words.settings.length + 1)
    const low = words.settings.find(({ id }) => id === 'S1-low')
    expect(lines[1]).toContain(`,not kept,${low?.byHowMuch?.value},Hz,`)
    expect(lines[lines.length - 1]).toContain('Not for diagnosis')
  })
})

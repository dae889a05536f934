/** The write-up: what a workspace and its evaluation state for a paper, and what the user states in words beside it. */
import { tableToCsv } from '../files/index.ts'
import { designChain } from '../filter/index.ts'
import type { StageSpec } from '../filter/stage.ts'
import {
  type ChecklistItem,
  coefficientsCsv,
  coefficientsJson,
  type ExportPlan,
  exportPlan,
  JULIA_FILE,
  juliaSource,
  type Markup,
  methodsParagraph,
  OCTAVE_FILE,
  octaveSource,
  type PublishedExample,
  type PublishedSetting,
  type PublishedSource,
  publishedSettings,
  PYTHON_FILE,
  pythonSource,
  R_FILE,
  reportingChecklist,
  rSource,
  STATEMENT_FIELDS,
  type StatementField,
  type WriteUpFacts,
} from '../words/index.ts'
import type { Evaluation } from './evaluation.ts'
import { protocolOf } from './protocol.ts'
import { SOFTWARE_VERSION } from './software-version.ts'
import { DIFFERENCE, type Workspace } from './workspace.ts'

/** The longest statement that a workspace holds, in characters. */
export const MAX_STATEMENT = 1000

/**
 * What the write-up states.
 *
 * @param evaluation  of that workspace: sampling rate and epoch are those of the data that it was computed from.
 */
export function writeUpFacts(
  workspace: Workspace,
  { samplingRateHz, timesMs }: Pick<Evaluation, 'samplingRateHz' | 'timesMs'>,
): WriteUpFacts {
  const samples = timesMs.length
  return {
    ...protocolOf(workspace, samplingRateHz),
    ...(samples > 0 ? { epoch: { fromMs: timesMs[0], toMs: timesMs[samples - 1], samples } } : {}),
    statements: workspace.statements,
    ...(workspace.shown.chosen === DIFFERENCE && workspace.shown.difference ? { ofTwoConditions: true } : {}),
    ...(workspace.source.kind === 'recorded' && workspace.claims.filteredBefore === 'as stated'
      ? { noOtherFilters: true }
      : {}),
    softwareVersion: SOFTWARE_VERSION,
  }
}

/** The workspace with a field stated in words; blank text takes the statement back. */
export function stating(workspace: Workspace, field: StatementField, text: string): Workspace {
  const { [field]: before, ...others } = workspace.statements
  const said = text.slice(0, MAX_STATEMENT)
  if (said.trim() === '') return before === undefined ? workspace : { ...workspace, statements: others }
  return said === before ? workspace : { ...workspace, statements: { ...workspace.statements, [field]: said } }
}

/**
 * The field in which an item of the checklist can be stated in words: its own, or that of a statement which the paragraph still carries
 * although the item does not ask for it any more, so that it can be changed and taken back.
 */
export function fieldOf(
  { id, field }: Pick<ChecklistItem, 'id' | 'field'>,
  workspace: Workspace,
): StatementField | null {
  if (field) return field
  const known = STATEMENT_FIELDS.find((entry) => entry.field === id)
  return known && workspace.statements[known.field] !== undefined ? known.field : null
}

/** Everything that the write-up says in words. */
export interface WriteUpWords {
  readonly paragraph: Readonly<Record<Markup, string>>
  readonly caution: string
  readonly checklist: readonly ChecklistItem[]
  readonly settings: readonly PublishedSetting[]
  readonly examples: readonly PublishedExample[]
}

/** @throws RangeError for a chain that cannot be designed. */
export function writeUpWords(facts: WriteUpFacts): WriteUpWords {
  const { caution, settings, examples } = publishedSettings(facts)
  return {
    paragraph: {
      text: methodsParagraph(facts, 'text'),
      markdown: methodsParagraph(facts, 'markdown'),
      latex: methodsParagraph(facts, 'latex'),
    },
    ...{ caution, settings, examples },
    checklist: reportingChecklist(facts).items,
  }
}

export const PARAGRAPH_FILE: Readonly<Record<Markup, string>> = {
  text: 'methods-paragraph.txt',
  markdown: 'methods-paragraph.md',
  latex: 'methods-paragraph.tex',
}

export type CodeFormat = 'python' | 'octave' | 'r' | 'julia' | 'json' | 'csv'

/** What a file of code is asked for; its JSON is the question's key. */
export interface CodeQuestion {
  readonly chain: readonly StageSpec[]
  readonly samplingRateHz: number
  readonly extent: 'continuous' | 'epochs'
  readonly format: CodeFormat
}

export const codeQuestion = (
  { chain, samplingRateHz, extent }: Pick<WriteUpFacts, 'chain' | 'samplingRateHz' | 'extent'>,
  format: CodeFormat,
): CodeQuestion => ({ chain, samplingRateHz, extent, format })

/** Names under which the files are saved; an Octave function stands in a file of its own name. */
export const CODE_FILE: Readonly<Record<CodeFormat, string>> = {
  python: PYTHON_FILE,
  octave: OCTAVE_FILE,
  r: R_FILE,
  julia: JULIA_FILE,
  json: 'sidelobe-coefficients.json',
  csv: 'sidelobe-coefficients.csv',
}

const SOURCE_OF: Readonly<Record<Exclude<CodeFormat, 'json' | 'csv'>, (plan: ExportPlan) => string>> = {
  python: pythonSource,
  octave: octaveSource,
  r: rSource,
  julia: juliaSource,
}

/** The plan made last: the other languages of the same chain need no other. */
let made: { key: string; plan: ExportPlan } | null = null

/**
 * The chain as a file. For the four languages the expected output of a self-check is computed, which takes its time for long kernels.
 *
 * @throws RangeError for a chain that cannot be designed, and where direct form in double precision cannot run it.
 */
export function exportedCode({ chain: specs, samplingRateHz, extent, format }: CodeQuestion): string {
  if (format === 'json' || format === 'csv') {
    const chain = designChain(specs, samplingRateHz)
    return format === 'json' ? coefficientsJson(chain) : coefficientsCsv(chain)
  }
  const key = JSON.stringify([specs, samplingRateHz, extent])
  if (made?.key !== key) made = { key, plan: exportPlan(designChain(specs, samplingRateHz), extent) }
  return SOURCE_OF[format](made.plan)
}

const sourcesWords = (sources: readonly PublishedSource[]) =>
  sources.map(({ words, mark }) => `${words} (${mark})`).join('; ')

/** The checklist as a table in a file. */
export function checklistCsv({ checklist }: WriteUpWords): string {
  return tableToCsv(
    ['item', 'state', 'what is reported', 'asked for by'],
    checklist.map(({ item, state, words, sources }) => [item, state, words, sourcesWords(sources)]),
  )
}

/** The published settings as a table in a file, under their caution; "by" holds the amount with full digits. */
export function settingsCsv({ settings, caution }: WriteUpWords): string {
  const header = ['about', 'asked', 'filters looked at', 'the chain', 'verdict', 'by', 'unit of by', 'source', 'mark']
  return tableToCsv(header, [
    ...settings.map(({ about, requirement, stages, found, verdict, byHowMuch, source }) => [
      ...[about, requirement, stages, found, verdict],
      ...[byHowMuch?.value ?? '', byHowMuch?.unit ?? '', source.words, source.mark],
    ]),
    ['caution', caution, ...Array<string>(header.length - 2).fill('')],
  ])
}

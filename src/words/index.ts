export { brief, exact, fixed, list, measured, parseNumber, signed } from './number.ts'
export { type RemarkFacts, remarkWords } from './remark.ts'
export { changeWords, decimalsOf, rowWords, valueWords } from './row-words.ts'
export { inWords, partOfField } from './problem.ts'
export { type NamedChain, pinName, pinNames, sameChain, shortened } from './pin-name.ts'
export {
  componentsWords,
  eventsWords,
  type Protocol,
  protocolLine,
  protocolText,
  scoreWords,
  windowWords,
} from './protocol-line.ts'
export {
  meaningWords,
  PASS_WORD,
  type Piece,
  stageName,
  stagePieces,
  stageShortName,
  WINDOW_WORD,
} from './stage-words.ts'
export {
  heldFixedWords,
  momentRowWords,
  momentWords,
  notTracedWords,
  shareWords,
  spanWords,
  stageSummary,
  type TracedFigure,
  tracedPhrase,
  traceQuestion,
  traceValueWords,
  trustWords,
  zeroWords,
} from './trace-words.ts'
export { type SaidNumber, type TraceSummary, type TraceSummaryFacts, traceSummary } from './trace-summary.ts'
export { coefficientsCsv, coefficientsJson } from './exported-code/coefficients.ts'
export { type ExportPlan, type ExportStage, exportPlan, type SelfCheck } from './exported-code/export-plan.ts'
export { JULIA_FILE, juliaSource } from './exported-code/julia.ts'
export { OCTAVE_FILE, octaveSource } from './exported-code/octave.ts'
export { PYTHON_FILE, pythonSource } from './exported-code/python.ts'
export { R_FILE, rSource } from './exported-code/r.ts'
export { candidateWords, mapLineWords, rollOffWords, tradeOffWords } from './trade-off-words.ts'
export type { MapLine, TradeOffWordsQuestion } from './trade-off-words.ts'
export { type ChecklistItem, reportingChecklist } from './reporting-checklist.ts'
export type { Markup } from './markup.ts'
export { methodsParagraph } from './methods-paragraph.ts'
export { CAUTION, type PublishedSource } from './published-source.ts'
export { type PublishedExample, type PublishedSetting, publishedSettings } from './published-settings.ts'
export type { Verdict } from './setting-check.ts'
export { STATEMENT_FIELDS, type StatementField } from './statement-fields.ts'
export type { WriteUpFacts } from './write-up-facts.ts'
export { type ClaimAnswerContext, claimReason, claimVerdictWords } from './claim-answer-words.ts'
export { curveSentence, variedWords } from './claim-curve-words.ts'
export { type ClaimSentenceContext, claimFormName, claimRowUnit, claimSentence, claimText } from './claim-words.ts'
export { type Dossier, type DossierClaim, type DossierSetting, dossierHtml, dossierMarkdown } from './dossier.ts'
export {
  type LateOnlyFacts,
  type LateOnlyWords,
  lateOnlyVerdictWords,
  lateOnlyWords,
} from './late-only-words.ts'

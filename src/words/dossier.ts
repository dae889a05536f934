import type { Component } from '../erp/component.ts'
import type { NoisePassed } from '../evidence/filtered-noise.ts'
import type { TraceSource } from '../evidence/traced-waveform.ts'
import type { ClaimAnswer, ClaimCurve, ClaimForm, ClaimSetting, Unit } from '../evidence/claims/claim.ts'
import { statementOf } from '../evidence/claims/statement-of.ts'
import { type ClaimAnswerContext, claimReason, claimVerdictWords } from './claim-answer-words.ts'
import { changeWithUnit, intervalWithUnit, toneWithUnit, valueWithUnit } from './claim-number.ts'
import { curveSentence } from './claim-curve-words.ts'
import { componentWords } from './component-words.ts'
import { claimText } from './claim-words.ts'
import { inlineSvg } from './inline-svg.ts'
import { type LateOnlyFacts, lateOnlyWords } from './late-only-words.ts'
import { inMarkup } from './markup.ts'
import { methodsParagraph } from './methods-paragraph.ts'
import { noiseWords } from './noise-words.ts'
import { exact, list } from './number.ts'
import { inWords } from './problem.ts'
import { windowWords } from './protocol-line.ts'
import type { WriteUpFacts } from './write-up-facts.ts'

/** The claims of one paper or review, with all that their answers rest on. */
export interface Dossier {
  /** The user's words; empty for none. */
  readonly title: string
  readonly claims: readonly DossierClaim[]
  /** What claims were answered from; several claims may share one. */
  readonly settings: readonly DossierSetting[]
  readonly softwareVersion: string
}

export interface DossierClaim {
  readonly form: ClaimForm
  /** Where it was made, in the user's words; empty for nowhere. */
  readonly madeIn: string
  readonly answer: ClaimAnswer
  readonly context: ClaimAnswerContext
  /** Null where nothing was varied. */
  readonly curve: ClaimCurve | null
  /** The figure as the text of an svg file; null for none. */
  readonly figureSvg: string | null
  /** Others beside it, each with what it shows. */
  readonly moreFigures?: readonly { readonly title: string; readonly svg: string }[]
  /** Of the late-only form. */
  readonly lateOnly?: LateOnlyFacts
  /** Place in `settings`, counted from 0. */
  readonly setting: number
}

export interface DossierSetting {
  /** What the chain is called; null for the chain of the protocol line. */
  readonly chainName: string | null
  /** The protocol of the claims: its chain is the chain of the claims. */
  readonly facts: WriteUpFacts
  readonly setting: Pick<
    ClaimSetting,
    'chosen' | 'measure' | 'noise' | 'noisePassed' | 'trials' | 'taken' | 'filteredBefore' | 'unseenThreshold'
  > & { readonly conditions: readonly { readonly name: string; readonly source?: TraceSource }[] }
  /** Name of the file that the data came from; null for a built waveform. */
  readonly file: string | null
  /** Where the noise comes from, as a participle: "as stated by the user", "as Sidelobe assumes where nothing else is stated", "estimated from the plus–minus average". */
  readonly noiseFrom: string
  readonly scoreUnit: Unit
}

/** One claim, or one thing assumed, as plain text under a name. */
interface Entry {
  readonly name: string
  readonly text: string
}

const UNTITLED = 'Claims about a filter'

const CAUTION =
  'For research planning, not for diagnosis. Clinical recordings follow the local laboratory’s standards and the responsible clinician.'

/** What every answer takes for granted, whatever the claim. */
export const DOSSIER_CONVENTIONS: readonly Entry[] = [
  {
    name: 'Filter',
    text: 'The whole chain of the assumptions that a claim names, without stages that are switched off. Stages in the data are not run again. “Unfiltered” and “before” mean before the stages that were applied here.',
  },
  {
    name: 'Verdicts',
    text: '“Holds” and “does not hold” are answers under the assumptions listed, and under no others. “Cannot be told” means that they do not decide it.',
  },
  {
    name: 'Cutoffs',
    text: 'Half-amplitude (gain 1/2) and half-power (gain 1/√2) cutoffs are those of a stage after all its passes. A design cutoff is the half-power cutoff of a single pass of a Butterworth filter, or the centre of the transition of a windowed sinc.',
  },
  {
    name: 'Extent',
    text: 'A chain ran either on the continuous waveform or recording, before epochs were cut, or on the cut-out epochs, whose ends were then padded. Amplifier stages ran continuously in either case.',
  },
  {
    name: 'Baseline',
    text: 'Where there is a baseline, its mean was subtracted after the chain. The unfiltered waveform had its own baseline mean subtracted.',
  },
  {
    name: 'Changes',
    text: 'A change is the value after the filter minus the value before, and is held against the amount by its size. In per cent it is of the value before; where that is under 20 % of what the whole unfiltered waveform’s largest absolute value stands for, it is of the latter.',
  },
  {
    name: 'Deflections',
    text: 'The deflection that a filter makes in a window is the value after minus before that is largest in size there. The unfiltered waveform counts as having none where it stays under 5 % of its largest absolute value in the epoch.',
  },
  {
    name: 'Outside a window',
    text: 'What the trace-back does not find at the window’s own samples: other moments, neighbouring events, and what the padding of an epoch invented. Shares of opposite sign make numbers over 100 % or below 0.',
  },
  {
    name: 'Effects',
    text: 'An effect is the first condition minus the second, as a mean amplitude. It counts as absent where it is smaller in size than the amount that the claim names.',
  },
  {
    name: 'Onsets',
    text: 'The onset is the onset latency of the readout. A shift is counted in the direction that the claim names and is negative in the other.',
  },
  {
    name: 'Frequencies',
    text: 'An attenuation is −20·log10 of the gain of the stages applied here, counted up to 300 dB. A tone that is locked to the event keeps its amplitude in the average; of one that is not, the average holds the root mean square amplitude, which falls with the square root of the trials.',
  },
  {
    name: 'Versions',
    text: 'The causal version of a recursive stage that is run both ways is the same sections run forward twice; of a compensated windowed sinc its minimum-phase form; of a moving average its causal form. The zero-phase version of a forward stage has the same order per pass and the same cutoffs as applied, and is run both ways, so that its roll-off doubles; of a causal windowed sinc or moving average it is the compensated one. Amplifier stages stay as they are.',
  },
  {
    name: 'Intervals',
    text: 'Intervals are 95 % intervals under the stated noise and number of trials. Claims are not corrected for how many of them were checked.',
  },
  {
    name: 'What would change it',
    text: 'One quantity of one stage was varied and everything else was kept. Only the range named was looked at, point by point, with each change of the verdict narrowed down between its neighbours; a change and its reversal between two neighbouring points could have been missed. Of the late-only fit few points were tried.',
  },
]

/**
 * The dossier as one self-contained HTML page: light, no script, nothing from outside.
 *
 * @throws RangeError for a figure that is no svg or holds scripts or outside references, or a claim whose setting there is not.
 */
export function dossierHtml(dossier: Dossier): string {
  const title = titleOf(dossier)
  const { claims, settings } = dossier
  const rows = claims.map(
    (claim, i) =>
      `<tr><th scope="row"><a href="#claim-${i + 1}">${i + 1}</a></th><td>${escapeHtml(sentenceOf(dossier, claim))}</td>` +
      `<td class="${verdictClass(claim)}">${claimVerdictWords(claim.answer.verdict)}</td></tr>`,
  )
  const summary =
    claims.length === 0
      ? '<p>No claim was made.</p>'
      : `<table><caption>Claims and their verdicts</caption><thead><tr><th scope="col">No.</th><th scope="col">Claim</th>` +
        `<th scope="col">Verdict</th></tr></thead><tbody>${rows.join('')}</tbody></table>`
  const body = [
    `<header><h1>${escapeHtml(title)}</h1>`,
    `<p>${escapeHtml(opening(dossier))}</p>`,
    `<p class="caution">${CAUTION}</p></header>`,
    `<main>${summary}`,
    ...claims.map((claim, i) => claimHtml(dossier, claim, i)),
    '<section aria-labelledby="assumptions"><h2 id="assumptions">Assumptions</h2>',
    ...settings.map(
      (setting, i) => `<h3 id="setting-${i + 1}">Assumptions ${letterOf(i)}</h3>${listHtml(settingEntries(setting))}`,
    ),
    '</section>',
    `<section aria-labelledby="conventions"><h2 id="conventions">Conventions</h2>${listHtml(DOSSIER_CONVENTIONS)}</section>`,
    '</main>',
    `<footer><p>${escapeHtml(software(dossier))}</p></footer>`,
  ]
  return [
    '<!doctype html>',
    '<html lang="en">',
    `<head><meta charset="utf-8"><meta name="viewport" content="width=device-width, initial-scale=1">`,
    `<title>${escapeHtml(title)}</title>`,
    `<style>${CSS}</style></head>`,
    `<body>${body.join('\n')}</body>`,
    '</html>',
    '',
  ].join('\n')
}

/** The same as Markdown; in place of each figure stands what it shows. */
export function dossierMarkdown(dossier: Dossier): string {
  const md = (words: string) => inMarkup(words, 'markdown')
  const { claims, settings } = dossier
  const item = ({ name, text }: Entry) => `- **${md(name)}:** ${md(text)}`
  const rows = claims.map(
    (claim, i) => `| ${i + 1} | ${md(sentenceOf(dossier, claim))} | ${claimVerdictWords(claim.answer.verdict)} |`,
  )
  const blocks = [
    `# ${md(titleOf(dossier))}`,
    md(opening(dossier)),
    md(CAUTION),
    ...(claims.length === 0
      ? ['No claim was made.']
      : [['| No. | Claim | Verdict |', '| --- | --- | --- |', ...rows].join('\n')]),
    ...claims.flatMap((claim, i) => [
      `## Claim ${i + 1}`,
      md(sentenceOf(dossier, claim)),
      claimEntries(dossier, claim).map(item).join('\n'),
    ]),
    '## Assumptions',
    ...settings.flatMap((setting, i) => [
      `### Assumptions ${letterOf(i)}`,
      settingEntries(setting).map(item).join('\n'),
    ]),
    '## Conventions',
    DOSSIER_CONVENTIONS.map(item).join('\n'),
    md(software(dossier)),
  ]
  return `${blocks.join('\n\n')}\n`
}

function titleOf({ title }: Dossier): string {
  return inMarkup(title, 'text') || UNTITLED
}

function opening({ claims }: Dossier): string {
  const count = (verdict: ClaimAnswer['verdict']) => claims.filter(({ answer }) => answer.verdict === verdict).length
  const [yes, no, unknown] = [count('holds'), count('does not hold'), count('cannot be told')]
  const said = (n: number, one: string, many: string) => `${n} ${n === 1 ? one : many}`
  if (claims.length === 0) return 'This dossier holds no claim.'
  return (
    `${said(claims.length, 'claim was', 'claims were')} checked: ${said(yes, 'holds', 'hold')}, ` +
    `${said(no, 'does', 'do')} not hold, and ${unknown} cannot be told. Each verdict rests on the assumptions listed below.`
  )
}

function software({ softwareVersion }: Dossier): string {
  return `Computed with Sidelobe${softwareVersion.trim() === '' ? '' : ` ${softwareVersion.trim()}`}, in double precision. The text is generated from the numbers.`
}

function settingOf(dossier: Dossier, claim: DossierClaim): DossierSetting {
  const setting = dossier.settings[claim.setting]
  if (!setting)
    throw new RangeError(
      `a claim's setting must lie between 0 and ${dossier.settings.length - 1}, was ${claim.setting}`,
    )
  return setting
}

function sentenceOf(dossier: Dossier, claim: DossierClaim): string {
  return inMarkup(claimText(claim.form, { scoreUnit: settingOf(dossier, claim).scoreUnit }), 'text')
}

function claimEntries(dossier: Dossier, claim: DossierClaim): Entry[] {
  const { form, madeIn, answer, context, curve, lateOnly } = claim
  const { facts } = settingOf(dossier, claim)
  const where = inMarkup(madeIn, 'text')
  const words = lateOnly ? lateOnlyWords(lateOnly) : null
  return [
    { name: 'Made in', text: where === '' ? 'not stated' : where },
    { name: 'Verdict', text: claimVerdictWords(answer.verdict) },
    { name: 'Number', text: numberText(form, answer) },
    { name: 'Reason', text: claimReason(form, answer, context) },
    ...(words
      ? [
          { name: 'Early activity', text: words.estimate },
          { name: 'What decided it', text: `${words.verdict}. ${words.reason}` },
          { name: 'Noise found', text: `${words.noise} ${words.alpha}` },
          { name: 'Other assumptions', text: words.robust },
          ...(words.scan === null ? [] : [{ name: 'Other onsets', text: words.scan }]),
          ...(words.bumps === null ? [] : [{ name: 'Anywhere before', text: words.bumps }]),
          { name: 'Limit of the method', text: words.phaseLocked },
          ...(facts.source === 'recorded'
            ? [
                {
                  name: 'Stages in the data',
                  text: `taken to have run on ${facts.extent === 'continuous' ? 'the continuous recording' : 'the cut-out epochs'}`,
                },
              ]
            : []),
        ]
      : []),
    {
      name: 'What would change it',
      text: curve ? curveSentence(form, curve, facts.chain) : 'No quantity of the filter was varied.',
    },
    { name: 'Rests on', text: `Assumptions ${letterOf(claim.setting)}` },
  ]
}

/** The number of an answer, or both numbers of a comparison. */
function numberText(form: ClaimForm, answer: ClaimAnswer): string {
  const { grounds } = answer
  if (grounds.kind === 'compared' && form.form === 'twin')
    return `as it is ${numberOf(form.shows, grounds.present)}; ${form.twin} version ${numberOf(form.shows, grounds.compared)}`
  if (grounds.kind === 'compared' && form.form === 'meaning')
    return `as stated ${numberOf(form.conclusion, grounds.present)}; with the other meaning ${numberOf(form.conclusion, grounds.compared)}`
  return numberOf(statementOf(form), answer)
}

function numberOf(form: ClaimForm, { number, unit, interval }: ClaimAnswer): string {
  if (number === null || Number.isNaN(number)) return 'none'
  if (number === Infinity) return 'without limit'
  const range = interval?.every(Number.isFinite) ? ` (95 % interval ${intervalWithUnit(interval, unit, [0])})` : ''
  const towards = form.form === 'onset' ? ` towards ${form.direction}` : ''
  return `${sized(form, number, unit)}${towards}${range}`
}

/** A share, an attenuation or what is left of a tone has no plus sign. */
function sized(form: ClaimForm, number: number, unit: Unit): string {
  if (form.form === 'tone') return toneWithUnit(number, unit)
  return form.form === 'from-outside' || form.form === 'attenuation'
    ? valueWithUnit(number, unit)
    : changeWithUnit(number, unit, [0])
}

/** a, b, … */
const smallLetterOf = (index: number) => letterOf(index).toLowerCase()

/** A, B, … Z, AA. */
function letterOf(index: number): string {
  const rest = Math.floor(index / 26)
  return (rest > 0 ? letterOf(rest - 1) : '') + String.fromCharCode(65 + (index % 26))
}

function settingEntries({ chainName, facts, setting, file, noiseFrom }: DossierSetting): Entry[] {
  const { chosen, measure, noise, noisePassed, trials, taken, filteredBefore, unseenThreshold, conditions } = setting
  const measured = taken === 'as measured' || facts.source === 'recorded'
  const all = list(conditions.map((one) => quoted(one.name)))
  const others = conditions.length > 1 ? `; the conditions are ${all}` : ''
  const side = measure.polarity === 'negative' ? 'negative' : 'positive'
  const name = chainName === null ? '' : inMarkup(chainName, 'text')
  return [
    ...(name === '' ? [] : [{ name: 'Chain', text: `kept by the claim under the name “${name}”` }]),
    { name: 'Methods', text: methodsOf(facts) },
    {
      name: 'Waveform',
      text:
        chosen.kind === 'condition'
          ? `condition ${quoted(chosen.name)}${others}`
          : `the difference ${quoted(chosen.first)} minus ${quoted(chosen.second)}${others}`,
    },
    ...conditions.flatMap(({ name: condition, source }) =>
      source?.kind === 'built' ? [{ name: 'Components', text: componentsOf(condition, source.components) }] : [],
    ),
    { name: 'Data', text: file === null ? 'built from components; no recording' : `file ${quoted(file)}` },
    {
      name: 'Filtered before',
      text:
        facts.source === 'built'
          ? 'by the stages stated as in the data, and by no others'
          : filteredBefore === 'as stated'
            ? 'taken to have passed the stages stated as in the data, and no others'
            : 'not known beyond the stages stated as in the data',
    },
    { name: 'Noise of single trials', text: `${noiseWords(noise)}; ${noiseFrom}; ${PASSED[noisePassed]}` },
    { name: 'Trials', text: `${exact(trials)} per condition` },
    {
      name: 'Waveform taken',
      text: !measured
        ? 'as it stands: as known without noise, so that no number but the late-only fit’s has an interval'
        : 'as measured: numbers carry the noise of the trials, and an amount within their 95 % interval cannot be told from them',
    },
    {
      name: 'Rows of the readout',
      text: `mean amplitude from ${windowWords(measure.mean.fromMs, measure.mean.toMs)}; peak, area and latencies from ${windowWords(measure.peak.fromMs, measure.peak.toMs)}, ${side} side`,
    },
    {
      name: 'Samples outside the data',
      text: `a result of which more than ${exact(Number((100 * unseenThreshold).toPrecision(6)))} % of the absolute weight falls on them cannot be told`,
    },
  ]
}

/** A built waveform is an assumption too: what it was built from stands here in full. */
function componentsOf(condition: string, components: readonly Component[]): string {
  const built = components.map((component) => inMarkup(componentWords(component), 'text')).join('; ')
  return `of ${quoted(condition)}: ${built || 'none'}`
}

const PASSED: Record<NoisePassed, string> = {
  nothing: 'it stands for the noise before every stage',
  'the stages in the data': 'it stands for the noise after the stages in the data',
}

const quoted = (name: string) => `“${inMarkup(name, 'text')}”`

/** A chain that cannot be designed has no methods paragraph, but its dossier still says why. */
function methodsOf(facts: WriteUpFacts): string {
  try {
    return methodsParagraph(facts)
  } catch (error) {
    if (error instanceof RangeError) return `The chain cannot be designed. ${inWords(error.message)}`
    throw error
  }
}

function claimHtml(dossier: Dossier, claim: DossierClaim, i: number): string {
  const n = i + 1
  const entries = claimEntries(dossier, claim)
  const figure =
    claim.figureSvg === null
      ? ''
      : `<figure>${inlineSvg(claim.figureSvg, `claim-${n}-`)}<figcaption>Figure ${n}. ${escapeHtml(sentenceOf(dossier, claim))}</figcaption></figure>`
  const more = (claim.moreFigures ?? []).map(
    ({ title, svg }, k) =>
      `<figure>${inlineSvg(svg, `claim-${n}${smallLetterOf(k)}-`)}<figcaption>Figure ${n}${smallLetterOf(k)}. ${escapeHtml(title)}</figcaption></figure>`,
  )
  return (
    `<section aria-labelledby="claim-${n}"><h2 id="claim-${n}">Claim ${n}</h2>` +
    `<p class="claim">${escapeHtml(sentenceOf(dossier, claim))}</p>` +
    `<dl>${entries
      .map(({ name, text }) => {
        const verdict = name === 'Verdict' ? ` class="${verdictClass(claim)}"` : ''
        const words =
          name === 'Rests on' ? `<a href="#setting-${claim.setting + 1}">${escapeHtml(text)}</a>` : escapeHtml(text)
        return `<div><dt>${escapeHtml(name)}</dt><dd${verdict}>${words}</dd></div>`
      })
      .join('')}</dl>${figure}${more.join('')}</section>`
  )
}

function listHtml(entries: readonly Entry[]): string {
  return `<dl>${entries.map(({ name, text }) => `<div><dt>${escapeHtml(name)}</dt><dd>${escapeHtml(text)}</dd></div>`).join('')}</dl>`
}

function verdictClass({ answer }: DossierClaim): string {
  return { holds: 'holds', 'does not hold': 'fails', 'cannot be told': 'open' }[answer.verdict]
}

/** A number stays on one line with its unit. */
const NUMBER_AND_UNIT = /(\d) (?=(?:Hz|ms|s|dB|µV|%)(?![A-Za-z]))/g

/** Text made safe for HTML, in content and in attributes. */
function escapeHtml(words: string): string {
  return words
    .replace(
      /[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]|[\ud800-\udbff](?![\udc00-\udfff])|(?<![\ud800-\udbff])[\udc00-\udfff]/g,
      '\ufffd',
    )
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('>', '&gt;')
    .replaceAll('"', '&quot;')
    .replaceAll("'", '&#39;')
    .replace(NUMBER_AND_UNIT, '$1\u00a0')
}

/** The page's own light palette; it stands alone, so the tokens are written out. */
const CSS = `
:root { color-scheme: light; }
* { box-sizing: border-box; }
body { margin: 0 auto; max-width: 46rem; padding: 2rem 1.25rem 4rem; background: #fffdf8; color: #22262b;
  font: 1rem/1.5 system-ui, sans-serif; font-variant-numeric: tabular-nums; overflow-wrap: break-word; }
h1, h2, h3, .claim { font-family: Georgia, 'Times New Roman', serif; line-height: 1.25; }
h1 { font-size: 1.75rem; font-weight: 600; margin: 0 0 .75rem; }
h2 { font-size: 1.25rem; font-weight: 600; margin: 2.5rem 0 .5rem; }
h3 { font-size: 1rem; font-weight: 600; margin: 1.5rem 0 .5rem; }
.claim { font-size: 1.25rem; line-height: 1.4; margin: .25rem 0 1rem; }
.caution, figcaption, footer { color: #5f5e58; font-size: .875rem; }
table { border-collapse: collapse; width: 100%; margin: 1.5rem 0; }
caption { text-align: left; color: #5f5e58; font-size: .875rem; padding-bottom: .25rem; }
th, td { text-align: left; vertical-align: top; padding: .375rem .75rem .375rem 0; border-top: 1px solid #d9d4c7; }
td:last-child { white-space: nowrap; padding-right: 0; }
dl { margin: 0; }
dl > div { display: grid; grid-template-columns: 11rem 1fr; gap: 0 1rem; padding: .375rem 0; border-top: 1px solid #d9d4c7; }
dt { color: #5f5e58; }
dd { margin: 0; }
.holds { color: #2f6b3b; font-weight: 600; }
.fails { color: #9e1b32; font-weight: 600; }
.open { color: #22262b; font-weight: 600; }
a { color: #14576b; }
figure { margin: 1.25rem 0 0; }
figure svg { display: block; max-width: 100%; height: auto; }
footer { margin-top: 2.5rem; border-top: 1px solid #d9d4c7; }
@media (max-width: 32rem) { dl > div { grid-template-columns: 1fr; } }
@media print {
  body { max-width: none; padding: 0; background: #fff; font-size: 10.5pt; }
  h2, h3 { break-after: avoid; }
  dl > div, figure, tr { break-inside: avoid; }
  a { color: inherit; text-decoration: none; }
}
`

/**
 * The workspace: everything that the user has said, as one plain JSON object. Its types come from its schema; undo, autosave, the
 * link and the workspace file are all this object. What follows from it is in `evaluate.ts`; how it is looked at (theme, scales, which figure
 * shows what) is in `view.ts`.
 */
import * as v from 'valibot'
import { checkNoise, type NoiseSpec } from '../erp/noise.ts'
import { SCENARIOS, type Scenario } from '../erp/scenarios.ts'
import { inWords } from '../words/index.ts'
import { broughtForward, VERSION } from './migrations.ts'

const finite = v.pipe(v.number(), v.finite())
const positive = v.pipe(finite, v.gtValue(0))
const text = v.pipe(v.string(), v.maxLength(400))

const stageFlags = { enabled: v.optional(v.boolean()), inData: v.optional(v.boolean()) }
const passSchema = v.picklist(['low', 'high', 'band', 'stop'])
const directionSchema = v.picklist(['forward', 'both'])
const meaningSchema = v.picklist(['half-amplitude', 'half-power', 'design'])
const windowSchema = v.union([
  v.object({ name: v.picklist(['rectangular', 'hann', 'hamming', 'blackman']) }),
  v.object({ name: v.literal('kaiser'), attenuationDb: finite }),
])

/** What is traced back: a row of the readout, or the value at a moment of the time figure. */
const questionSchema = v.variant('kind', [
  v.object({
    kind: v.literal('row'),
    row: v.picklist([
      'score',
      'mean-amplitude',
      'peak-amplitude',
      'signed-area',
      'peak-latency',
      'area-latency',
      'onset-latency',
      'false-deflection',
    ]),
    of: v.picklist(['after', 'change']),
  }),
  v.object({ kind: v.literal('moment'), atMs: finite, of: v.picklist(['after', 'change']) }),
])

/** Field types only: whether a filter can be designed is the filter room's own judgement, shown at the token. */
export const stageSchema = v.variant('design', [
  v.object({
    ...stageFlags,
    design: v.literal('butterworth'),
    pass: passSchema,
    order: finite,
    cutoffsHz: v.pipe(v.array(finite), v.maxLength(2)),
    meaning: meaningSchema,
    direction: directionSchema,
  }),
  v.object({
    ...stageFlags,
    design: v.literal('windowed-sinc'),
    pass: passSchema,
    cutoffsHz: v.pipe(v.array(finite), v.maxLength(2)),
    meaning: meaningSchema,
    transitionHz: finite,
    window: windowSchema,
    delay: v.picklist(['compensated', 'causal', 'minimum-phase']),
  }),
  v.object({
    ...stageFlags,
    design: v.literal('amplifier'),
    pass: v.picklist(['low', 'high']),
    order: finite,
    cutoffHz: finite,
  }),
  v.object({
    ...stageFlags,
    design: v.literal('notch'),
    frequencyHz: finite,
    bandwidthHz: finite,
    harmonics: finite,
    direction: directionSchema,
  }),
  v.object({
    ...stageFlags,
    design: v.literal('moving-average'),
    durationMs: finite,
    delay: v.picklist(['compensated', 'causal']),
  }),
])

const windowLimits = v.object({ fromMs: finite, toMs: finite })

const named = { name: text, amplitudeUv: finite }
const transient = { ...named, latencyMs: finite, widthMs: finite }
export const componentSchema = v.variant('shape', [
  v.object({ ...transient, shape: v.literal('gaussian') }),
  v.object({ ...transient, shape: v.literal('asymmetric'), riseShare: finite }),
  v.object({ ...transient, shape: v.literal('slow-wave'), edgeMs: finite }),
  v.object({ ...transient, shape: v.literal('ramp'), riseShare: finite }),
  v.object({ ...transient, shape: v.literal('damped-oscillation'), frequencyHz: finite, riseShare: finite }),
  v.object({ ...named, shape: v.literal('tone'), frequencyHz: finite, phaseRad: finite }),
])

const scoreSchema = v.object({
  kind: v.picklist(['mean', 'area', 'peak-amplitude', 'peak-latency', 'area-latency', 'onset-latency', 'moment']),
  fromMs: finite,
  toMs: finite,
  polarity: v.picklist(['positive', 'negative']),
  fraction: v.optional(finite),
})

const noiseFields = v.object({
  kind: v.literal('model'),
  exponent: finite,
  levelAt1HzUv2PerHz: finite,
  flatBelowHz: finite,
  whiteUv2PerHz: finite,
  alpha: v.optional(v.object({ centreHz: finite, sdHz: finite, peakUv2PerHz: finite })),
  driftAt1HzUv2PerHz: v.optional(finite),
  lines: v.pipe(
    v.array(v.object({ hz: finite, amplitudeUv: finite, locked: v.boolean(), phaseRad: v.optional(finite) })),
    v.maxLength(100),
  ),
})

/** The noise has no token at which a fault could be shown, so it is refused where it comes in. */
const noiseSchema = v.pipe(
  noiseFields,
  v.rawCheck(({ dataset, addIssue }) => {
    if (!dataset.typed) return
    try {
      checkNoise(dataset.value)
    } catch (error) {
      addIssue({ message: inWords((error as RangeError).message) })
    }
  }),
)

/** How a table is read where its header leaves it open; each is what the user confirmed or chose. */
const readingSchema = v.object({
  delimiter: v.optional(v.picklist([',', ';', '\t'])),
  decimal: v.optional(v.picklist(['.', ','])),
  layout: v.optional(v.picklist(['wide', 'long'])),
  columnsAre: v.optional(v.picklist(['channels', 'conditions'])),
  timeColumn: v.optional(text),
  valueColumn: v.optional(text),
  conditionColumn: v.optional(v.nullable(text)),
  channelColumn: v.optional(v.nullable(text)),
  participantColumn: v.optional(v.nullable(text)),
  trialColumn: v.optional(v.nullable(text)),
  ignoreColumns: v.optional(v.array(text)),
  timeUnit: v.optional(v.picklist(['s', 'ms', 'µs'])),
  amplitudeUnit: v.optional(v.picklist(['V', 'mV', 'µV', 'nV'])),
  samplingRateHz: v.optional(finite),
  firstMs: v.optional(finite),
  participant: v.optional(text),
  trial: v.optional(text),
})

const sourceSchema = v.variant('kind', [
  v.object({
    kind: v.literal('built'),
    samplingRateHz: finite,
    epoch: windowLimits,
    /** The events stand alone, or come every a to b ms: then the neighbours' waveforms overlap with this one's. */
    events: v.optional(v.union([v.literal('alone'), windowLimits]), 'alone'),
    conditions: v.pipe(
      v.array(v.object({ name: text, components: v.pipe(v.array(componentSchema), v.maxLength(200)) })),
      v.minLength(1),
      v.maxLength(40),
    ),
  }),
  v.object({
    kind: v.literal('recorded'),
    fileName: text,
    /** SHA-256 of the file's text: the data themselves stay outside the workspace. */
    fileId: text,
    reading: readingSchema,
  }),
])

const limitSchema = v.object({ value: positive, unit: v.picklist(['µV', 'ms', 'µV·s', '%']) })

const START_TRACE = {
  question: { kind: 'row' as const, row: 'score' as const, of: 'after' as const },
  stretches: null,
  threshold: 0.1,
}

/** Roll-offs of a map's rows: orders of one pass, or transition widths in Hz. */
export const MAX_ROLL_OFFS = 12

/** Two designs, each in two directions, are four kinds in all. */
export const MAX_BESIDE = 3

const tradeOffSchema = v.object({
  /** The stage that the map varies: its place in the chain, a new one, or (null) the first that can be varied. */
  stage: v.nullable(v.union([v.literal('insert'), v.pipe(finite, v.integer(), v.minValue(0))])),
  pass: v.picklist(['low', 'high']),
  design: v.picklist(['butterworth', 'windowed-sinc']),
  direction: directionSchema,
  /** Other kinds of filter whose maps stand beside this one's. */
  beside: v.optional(
    v.pipe(
      v.array(v.object({ design: v.picklist(['butterworth', 'windowed-sinc']), direction: directionSchema })),
      v.maxLength(MAX_BESIDE),
    ),
    [],
  ),
  fromHz: positive,
  toHz: positive,
  /** Null: those that suggest themselves for the design. */
  rollOffs: v.nullable(v.pipe(v.array(positive), v.minLength(1), v.maxLength(MAX_ROLL_OFFS))),
  /** The largest sizes accepted. A bias that is not given is the limit of the score in the readout. */
  limits: v.partial(
    v.object({
      bias: v.union([positive, v.literal('none')]),
      noise: positive,
      totalError: positive,
      latencyShiftMs: positive,
      /** Of the score for which bias, noise and total error were written: for one in another unit they hold nothing. */
      unit: v.picklist(['µV', 'ms', 'µV·s']),
    }),
  ),
  layer: v.picklist(['bias', 'noise', 'total error', 'equal-trials factor', 'latency shift']),
  /** What is not known of each component: ± ms of latency, ± per cent of width and amplitude; null: the waveform as it stands. */
  robust: v.nullable(
    v.object({
      latencyMs: v.pipe(finite, v.minValue(0), v.maxValue(1000)),
      widthPercent: v.pipe(finite, v.minValue(0), v.maxValue(90)),
      amplitudePercent: v.pipe(finite, v.minValue(0), v.maxValue(100)),
    }),
  ),
  over: v.picklist(['worst', 'typical']),
  /** Of a loaded table: the waveform that is shown, or the average over all its conditions. */
  waveform: v.picklist(['chosen', 'average']),
})

export const START_TRADE_OFF: v.InferOutput<typeof tradeOffSchema> = {
  stage: null,
  pass: 'high',
  design: 'butterworth',
  direction: 'both',
  beside: [],
  fromHz: 0.01,
  toHz: 3,
  rollOffs: null,
  limits: {},
  layer: 'bias',
  robust: null,
  over: 'worst',
  waveform: 'chosen',
}

/** Cutoffs that a map of this pass begins with, Hz. */
export const RANGE = { high: { fromHz: 0.01, toHz: 3 }, low: { fromHz: 5, toHz: 100 } } as const

/** The map of a scenario is about its own filter: the first with one cutoff. */
function tradeOffOf(chain: Scenario['chain']): v.InferOutput<typeof tradeOffSchema> {
  for (const spec of chain) {
    if (spec.design !== 'butterworth' && spec.design !== 'windowed-sinc') continue
    if ((spec.pass !== 'high' && spec.pass !== 'low') || spec.enabled === false) continue
    const { pass, design } = spec
    const zeroPhase = spec.design === 'butterworth' ? spec.direction === 'both' : spec.delay === 'compensated'
    return { ...START_TRADE_OFF, ...RANGE[pass], pass, design, direction: zeroPhase ? 'both' : 'forward' }
  }
  return START_TRADE_OFF
}

export const MAX_TRIALS = 1_000_000

export const MAX_PINS = 3

const keptChain = {
  name: text,
  chain: v.pipe(v.array(stageSchema), v.maxLength(60)),
  extent: v.picklist(['continuous', 'epochs']),
}

const amount = v.pipe(finite, v.minValue(0))

/** Statements that another version of a filter may or may not make true as well. */
const shownSchemas = [
  v.object({
    form: v.literal('change'),
    row: v.picklist([
      'score',
      'mean-amplitude',
      'peak-amplitude',
      'signed-area',
      'peak-latency',
      'area-latency',
      'onset-latency',
    ]),
    relation: v.picklist(['at least', 'at most']),
    amount,
    unit: v.picklist(['own', '%']),
  }),
  v.object({ form: v.literal('deflection'), window: windowLimits, amount, unit: v.picklist(['µV', '%']) }),
  v.object({ form: v.literal('from-outside'), window: windowLimits, percent: amount }),
  v.object({
    form: v.literal('effect'),
    first: text,
    second: text,
    window: windowLimits,
    says: v.picklist(['exists without the filter', 'is absent without the filter', 'changes sign']),
    leastUv: amount,
  }),
  v.object({ form: v.literal('onset'), direction: v.picklist(['earlier', 'later']), ms: amount }),
] as const
const shownSchema = v.variant('form', shownSchemas)

const claimFormSchema = v.variant('form', [
  ...shownSchemas,
  v.object({ form: v.literal('attenuation'), hz: positive, db: finite }),
  v.object({ form: v.literal('tone'), hz: positive, amplitudeUv: amount, belowUv: amount, locked: v.boolean() }),
  v.object({ form: v.literal('twin'), twin: v.picklist(['causal', 'zero-phase']), shows: shownSchema }),
  v.object({ form: v.literal('meaning'), stated: meaningSchema, other: meaningSchema, conclusion: shownSchema }),
  v.object({ form: v.literal('late-only'), t0Ms: finite, early: windowLimits, slackMs: amount }),
])

const claimSchema = v.object({
  /** Which of the claims it is, whatever their order. */
  id: v.pipe(finite, v.integer(), v.minValue(1)),
  says: claimFormSchema,
  /** Where it was made, in the user's words ("Reviewer 2, comment 4"). */
  madeIn: text,
  /** The chain of the protocol line (null), or one kept by the claim. */
  on: v.nullable(v.object(keptChain)),
  taken: v.picklist(['as it stands', 'as measured']),
  /** What is varied in the search for what would change the answer; null: the first cutoff that can be. */
  varied: v.nullable(
    v.object({
      stage: v.pipe(finite, v.integer(), v.minValue(0)),
      what: v.picklist(['cutoff', 'order', 'transition']),
      cutoff: v.picklist([0, 1]),
    }),
  ),
})

export const MAX_CLAIMS = 30

/** The claims of one paper or review. */
const claimsSchema = v.object({
  title: text,
  /** Of a recording: whether the stages in the data are all that it has passed; null: they are if there are any. */
  filteredBefore: v.nullable(v.picklist(['as stated', 'not known'])),
  list: v.pipe(v.array(claimSchema), v.maxLength(MAX_CLAIMS)),
})

const START_CLAIMS: v.InferOutput<typeof claimsSchema> = { title: '', filteredBefore: null, list: [] }

/** What the user says of what the page cannot know, by the checklist's field ("resampling"); shown in the write-up. */
const statementsSchema = v.pipe(
  v.record(v.pipe(v.string(), v.maxLength(60)), v.pipe(v.string(), v.maxLength(1000))),
  v.check((fields) => Object.keys(fields).length <= 60, 'more than 60 statements'),
)

export const workspaceSchema = v.object({
  version: v.literal(VERSION),
  title: text,
  /** One plain sentence of what to look at; empty for the user's own work. */
  remark: v.pipe(v.string(), v.maxLength(1000)),
  source: sourceSchema,
  /** Conditions drawn; the one that the readout and the score are about; a difference of two conditions; the channel. */
  shown: v.object({
    conditions: v.pipe(v.array(text), v.maxLength(400)),
    difference: v.nullable(v.object({ first: text, second: text })),
    chosen: text,
    channel: v.nullable(text),
  }),
  chain: v.pipe(v.array(stageSchema), v.maxLength(60)),
  extent: v.picklist(['continuous', 'epochs']),
  baseline: v.union([v.literal('none'), windowLimits]),
  trials: finite,
  score: scoreSchema,
  /** Windows of the readout's own rows. */
  measure: v.object({
    mean: windowLimits,
    peak: windowLimits,
    polarity: v.picklist(['positive', 'negative']),
  }),
  limits: v.partial(
    v.object({
      score: limitSchema,
      'mean-amplitude': limitSchema,
      'peak-amplitude': limitSchema,
      'signed-area': limitSchema,
      'peak-latency': limitSchema,
      'area-latency': limitSchema,
      'onset-latency': limitSchema,
      'false-deflection': limitSchema,
    }),
  ),
  noise: noiseSchema,
  /** Whether the noise is that model or is estimated from the loaded single trials. */
  noiseFrom: v.optional(v.picklist(['model', 'trials']), 'model'),
  /** Onset of a recorded waveform as the user states it; a built one's follows from its components. */
  onsetMs: v.nullable(finite),
  /** The question of the trace-back desk, its stretches (null: those that suggest themselves), and the unseen share that is too much. */
  trace: v.optional(
    v.object({
      question: questionSchema,
      stretches: v.nullable(v.pipe(v.array(v.object({ sample: finite, atMs: finite })), v.maxLength(200))),
      threshold: v.pipe(finite, v.minValue(0), v.maxValue(1)),
    }),
    START_TRACE,
  ),
  /** The trade-off desk: which filters are compared, for which waveforms, and what is accepted. */
  tradeOff: v.optional(tradeOffSchema, START_TRADE_OFF),
  /** Chains kept for comparison. */
  pins: v.optional(v.pipe(v.array(v.object(keptChain)), v.maxLength(MAX_PINS)), []),
  claims: claimsSchema,
  statements: statementsSchema,
})

export { SCENARIOS }

export type Workspace = v.InferOutput<typeof workspaceSchema>
export type Source = Workspace['source']
export type BuiltSource = Extract<Source, { kind: 'built' }>
export type RecordedSource = Extract<Source, { kind: 'recorded' }>
export type Question = Workspace['trace']['question']
export type TradeOff = Workspace['tradeOff']
export type Pin = Workspace['pins'][number]
export type Claims = Workspace['claims']
export type Claim = Claims['list'][number]
export type Reading = v.InferOutput<typeof readingSchema>

/** The name under which the difference wave is chosen. */
export const DIFFERENCE = 'difference wave'

/** A scenario as a workspace of its own. */
export function workspaceOf(scenario: Scenario): Workspace {
  const { conditions, samplingRateHz, epoch } = scenario.waveform
  return structuredClone({
    version: VERSION,
    title: scenario.title,
    remark: scenario.sentence,
    source: { kind: 'built', samplingRateHz, epoch, events: 'alone', conditions },
    shown: {
      conditions: [scenario.condition],
      difference: null,
      chosen: scenario.condition,
      channel: scenario.channel,
    },
    chain: scenario.chain,
    extent: scenario.extent,
    baseline: scenario.baseline,
    trials: scenario.trials,
    score: scenario.score,
    measure: scenario.measure,
    limits: scenario.limits,
    noise: modelNoise(scenario.noise),
    noiseFrom: 'model',
    onsetMs: null,
    trace: START_TRACE,
    tradeOff: tradeOffOf(scenario.chain),
    pins: [],
    claims: START_CLAIMS,
    statements: {},
  } satisfies Workspace)
}

function modelNoise(noise: NoiseSpec): Workspace['noise'] {
  if (noise.kind !== 'model') throw new RangeError('a scenario comes with a noise model')
  return noise
}

export const startWorkspace = (): Workspace => workspaceOf(SCENARIOS[0])

/** Longest part of a refusal that comes from the value refused. */
const MAX_QUOTED = 160

const quoted = (words: string) => (words.length > MAX_QUOTED ? `${words.slice(0, MAX_QUOTED)} …` : words)

/** The first field that is wrong and why. Only the first: a hostile file can have millions. */
function firstFault(value: unknown): { ok: true; workspace: Workspace } | { ok: false; fault: string } {
  const result = v.safeParse(workspaceSchema, value, { abortEarly: true })
  if (result.success) return { ok: true, workspace: result.output }
  const issue = result.issues[0]
  return { ok: false, fault: `${quoted(v.getDotPath(issue) ?? 'the whole file')}: ${quoted(issue.message)}` }
}

/**
 * What a workspace file, a link or the browser's storage holds, checked field by field. Older versions are brought forward first.
 *
 * @returns the workspace, or a sentence that names the first field that is wrong.
 */
export function readWorkspace(value: unknown): { ok: true; workspace: Workspace } | { ok: false; reason: string } {
  const forward = broughtForward(value)
  if (!forward.ok) return forward
  const result = firstFault(forward.value)
  if (result.ok) return result
  return { ok: false, reason: `this is no workspace that the page can read: ${result.fault}` }
}

/** Why a workspace, once kept, could not be read again: the first field and its fault; null where it can. */
export function whyUnreadable(workspace: Workspace): string | null {
  const result = firstFault(workspace)
  return result.ok ? null : result.fault
}

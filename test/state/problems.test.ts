import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { SCENARIOS } from '../../src/erp/scenarios.ts'
import type { StageSpec } from '../../src/filter/stage.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import type { Problem } from '../../src/state/evaluation.ts'
import { protocolOf } from '../../src/state/protocol.ts'
import type { RecordedData } from '../../src/state/recorded-data.ts'
import { DIFFERENCE, startWorkspace, type Workspace, workspaceOf } from '../../src/state/workspace.ts'
import { protocolLine } from '../../src/words/index.ts'
import { madeUpWorkspace } from './made-up-table.ts'

function problemsOf(workspace: Workspace, data: RecordedData | null = null): Problem[] {
  const outcome = evaluate(workspace, data)
  return outcome.ok ? [] : outcome.problems
}

/** Ids of all tokens that the page shows for a workspace: the paragraph's, and those of the readout's own windows. */
function shownTokens(workspace: Workspace): string[] {
  const rate = workspace.source.kind === 'built' ? workspace.source.samplingRateHz : 250
  const line = protocolLine(protocolOf(workspace, rate)).flatMap((piece) => (piece.kind === 'token' ? [piece.id] : []))
  return [...line, 'measure:mean', 'measure:peak', 'noise']
}

const start = startWorkspace()
const withStage = (change: object, index = 1): Workspace => ({
  ...start,
  chain: start.chain.map((spec, i) => (i === index ? ({ ...spec, ...change } as StageSpec) : spec)),
})
const withSource = (change: object): Workspace => ({
  ...start,
  source: { ...start.source, ...change } as Workspace['source'],
})
const withComponent = (change: object): Workspace => {
  const workspace = structuredClone(start)
  if (workspace.source.kind === 'built') Object.assign(workspace.source.conditions[0].components[0], change)
  return workspace
}

describe('what cannot be computed is said in words at its token', () => {
  test.each<[string, Workspace, string, RegExp]>([
    [
      'a cutoff above half the sampling rate',
      withStage({ cutoffsHz: [300] }),
      'stage:1:cutoff',
      /^Stage 2: the cutoff must lie between 0 and 250 \(half the sampling rate\), was 300\.$/,
    ],
    [
      'order 0',
      withStage({ order: 0 }),
      'stage:1:order',
      /^Stage 2: the order must be a whole number from 1 to 12, was 0\.$/,
    ],
    [
      'a transition that reaches 0 Hz',
      withStage({ cutoffsHz: [2], transitionHz: 5 }, 2),
      'stage:2:transition',
      /above 0 Hz: 5 about its centre at 2 Hz reaches from −0\.5 to 4\.5 Hz\.$/,
    ],
    [
      'a transition that reaches half the sampling rate',
      withStage({ cutoffsHz: [248], transitionHz: 5 }, 2),
      'stage:2:transition',
      /below 250 Hz \(half the sampling rate\)/,
    ],
    ['an empty cutoff', withStage({ cutoffsHz: [Number.NaN] }), 'stage:1:cutoff', /was no number\.$/],
    ['an empty transition', withStage({ transitionHz: Number.NaN }, 2), 'stage:2:transition', /was no number\.$/],
    ['an empty time constant', withStage({ cutoffHz: Number.NaN }, 0), 'stage:0:cutoff', /^Stage 1: .*no number\.$/],
    [
      'an amplifier after an offline stage',
      { ...start, chain: [start.chain[1], start.chain[0]] },
      'stage:1:design',
      /^Stage 2: an amplifier stage must come before all offline stages, but follows stage 1\.$/,
    ],
    [
      'a score window outside the epoch',
      { ...start, score: { ...start.score, toMs: 1200 } },
      'score-window',
      /^The score window must lie in the epoch \(−400 to 1000 ms\), was 80 to 1200 ms\.$/,
    ],
    [
      'a score window that ends before it begins',
      { ...start, score: { ...start.score, fromMs: 200 } },
      'score-window',
      /must begin before it ends/,
    ],
    [
      'a score window between two samples',
      { ...start, score: { ...start.score, fromMs: 80.5, toMs: 81 } },
      'score-window',
      /must hold at least one sample/,
    ],
    [
      'an empty limit of the score window',
      { ...start, score: { ...start.score, fromMs: Number.NaN } },
      'score-window',
      /no number/,
    ],
    [
      'a baseline outside the epoch',
      { ...start, baseline: { fromMs: -600, toMs: 0 } },
      'baseline',
      /^The baseline window must lie in the epoch/,
    ],
    [
      'a readout window outside the epoch',
      { ...start, measure: { ...start.measure, mean: { fromMs: 900, toMs: 1100 } } },
      'measure:mean',
      /^The window of the mean amplitude must lie in the epoch/,
    ],
    [
      'a readout window of a single sample',
      { ...start, measure: { ...start.measure, peak: { fromMs: 200, toMs: 201 } } },
      'measure:peak',
      /^The window of the peak and the area must hold at least 2 samples, 200 to 201 ms holds 1\.$/,
    ],
    [
      'no trials',
      { ...start, trials: 0 },
      'trials',
      /^The number of trials must be a whole number from 1 to 1000000, was 0\.$/,
    ],
    ['one and a half trials', { ...start, trials: 1.5 }, 'trials', /was 1\.5\.$/],
    ['an empty number of trials', { ...start, trials: Number.NaN }, 'trials', /was no number\.$/],
    [
      'a sampling rate of 50 Hz',
      withSource({ samplingRateHz: 50 }),
      'rate',
      /^The sampling rate must lie between 100 and 4096, was 50\.$/,
    ],
    [
      'an epoch of 5 ms',
      withSource({ epoch: { fromMs: 0, toMs: 5 } }),
      'waveform',
      /^The epoch must hold 16 to 1000000 samples/,
    ],
    [
      'a component without a width',
      withComponent({ widthMs: 0 }),
      'waveform',
      /^Component "late positivity": the width must lie between/,
    ],
    [
      'an unknown condition',
      { ...start, shown: { ...start.shown, conditions: ['oddBall'], chosen: 'oddBall' } },
      'waveform',
      /^The waveform has no condition “oddBall”\.$/,
    ],
    [
      'a difference that is not defined',
      { ...start, shown: { ...start.shown, chosen: DIFFERENCE } },
      'waveform',
      /^No difference wave is defined\.$/,
    ],
    [
      'a difference of an unknown condition',
      { ...start, shown: { ...start.shown, difference: { first: 'rare targets', second: 'x' }, chosen: DIFFERENCE } },
      'waveform',
      /no condition “x”/,
    ],
    [
      'noise that cannot be',
      { ...start, noise: { ...start.noise, exponent: -1 } },
      'noise',
      /^The exponent of the noise must lie between 0 and 4, was −1\.$/,
    ],
  ])('%s', (_, workspace, at, words) => {
    const problems = problemsOf(workspace)
    expect(problems.map((problem) => problem.at)).toEqual([at])
    expect(problems[0].message).toMatch(words)
    expect(shownTokens(workspace)).toContain(at)
  })

  test('an epoch not longer than a stage’s padding, with both numbers of samples', () => {
    const workspace = { ...withStage({ transitionHz: 2 }, 2), extent: 'epochs' as const }
    const problems = problemsOf(workspace)
    expect(problems).toEqual([])
    const short: Workspace = { ...workspace, ...withSource({ epoch: { fromMs: -200, toMs: 400 } }), extent: 'epochs' }
    const windows = { fromMs: 100, toMs: 300 }
    const tooShort: Workspace = {
      ...short,
      chain: withStage({ transitionHz: 2 }, 2).chain,
      measure: { mean: windows, peak: windows, polarity: 'positive' },
    }
    expect(problemsOf(tooShort)).toEqual([
      { at: 'extent', message: 'The windowed-sinc low-pass of 30 Hz needs 413 samples, the epoch has 301.' },
    ])
    expect(shownTokens(tooShort)).toContain('extent')
  })

  test('every part that is wrong is named, not only the first', () => {
    const workspace: Workspace = { ...withStage({ order: 0 }), trials: 0, baseline: { fromMs: 0, toMs: 5000 } }
    expect(problemsOf(workspace).map(({ at }) => at)).toEqual(['stage:1:order', 'trials', 'baseline'])
  })

  test('a recorded file that is not at hand', () => {
    const { workspace } = madeUpWorkspace()
    expect(problemsOf(workspace)).toEqual([
      { at: 'source', message: 'The data of “average-2024.csv” are not at hand: open the file again.' },
    ])
  })

  test('a channel or condition that a recorded file does not have', () => {
    const { workspace, table } = madeUpWorkspace()
    const elsewhere = { ...workspace, shown: { ...workspace.shown, channel: 'Oz' } }
    expect(problemsOf(elsewhere, table)).toEqual([
      { at: 'waveform', message: 'Channel must be one of Cz, PO7, was "Oz".' },
    ])
    const other = { ...workspace, shown: { ...workspace.shown, conditions: ['standard'], chosen: 'standard' } }
    expect(problemsOf(other, table)[0].at).toBe('waveform')
  })

  test('recorded values too large for any sum', () => {
    const { workspace, table } = madeUpWorkspace()
    table.waveforms[0] = {
      ...table.waveforms[0],
      values: table.waveforms[0].values.map((_, i) => (i % 2 === 0 ? 1e308 : -1e308)),
    }
    const problems = problemsOf(workspace, table)
    expect(problems.map(({ at }) => at)).toEqual(['waveform'])
    expect(problems[0].message).toMatch(/^The waveform must hold finite numbers, its value/)
  })

  test('a recording without a chosen channel is that of its first', () => {
    const { workspace, table } = madeUpWorkspace()
    const unchosen = { ...workspace, shown: { ...workspace.shown, channel: null } }
    expect(problemsOf(unchosen, table)).toEqual([])
    expect(protocolOf(unchosen, 250).waveform).toBe('rare of average-2024.csv')
    expect(protocolOf(workspace, 250).waveform).toBe('Cz, rare of average-2024.csv')
  })
})

/** Where numbers stand in an object, as paths of keys. */
function numberPaths(value: unknown, path: (string | number)[] = []): (string | number)[][] {
  if (typeof value === 'number') return path[0] === 'version' ? [] : [path]
  if (typeof value !== 'object' || value === null) return []
  return Object.entries(value).flatMap(([key, entry]) => numberPaths(entry, [...path, key]))
}

function withNumber(workspace: Workspace, path: readonly (string | number)[], value: number): Workspace {
  const copy = structuredClone(workspace)
  let place = copy as unknown as Record<string | number, unknown>
  for (const key of path.slice(0, -1)) place = place[key] as Record<string | number, unknown>
  place[path[path.length - 1]] = value
  return copy
}

const bases: Workspace[] = [
  ...SCENARIOS.map(workspaceOf),
  { ...workspaceOf(SCENARIOS[0]), extent: 'epochs' },
  {
    ...workspaceOf(SCENARIOS[3]),
    score: { kind: 'area-latency', fromMs: 70, toMs: 180, polarity: 'negative', fraction: 0.5 },
    chain: [
      { design: 'moving-average', durationMs: 20, delay: 'causal' },
      { design: 'butterworth', pass: 'band', order: 2, cutoffsHz: [1, 30], meaning: 'half-power', direction: 'both' },
      {
        design: 'windowed-sinc',
        pass: 'stop',
        cutoffsHz: [45, 55],
        meaning: 'half-amplitude',
        transitionHz: 5,
        window: { name: 'kaiser', attenuationDb: 60 },
        delay: 'causal',
      },
    ],
  },
]

const anyChange = fc
  .constantFrom(...bases)
  .chain((base) =>
    fc.tuple(
      fc.constant(base),
      fc.array(
        fc.tuple(
          fc.constantFrom(...numberPaths(base)),
          fc.constantFrom(Number.NaN, Number.POSITIVE_INFINITY, 0, -0, -1, 1.5, 1e-9, 0.30000000000000004, 300, 1e9),
        ),
        { minLength: 1, maxLength: 3 },
      ),
    ),
  )
  .map(([base, changes]) => changes.reduce((workspace, [path, value]) => withNumber(workspace, path, value), base))

describe('whatever numbers a workspace holds', () => {
  test('it is evaluated, or every problem is a sentence at a token that is shown', () => {
    fc.assert(
      fc.property(anyChange, (workspace) => {
        const outcome = evaluate(workspace, null)
        if (outcome.ok) {
          for (const { before, after } of outcome.evaluation.rows)
            for (const value of [before, after]) expect(typeof value === 'string' || Number.isFinite(value)).toBe(true)
          expect(outcome.evaluation.remark).not.toMatch(/NaN|undefined|\[object/)
          return
        }
        expect(outcome.problems.length).toBeGreaterThan(0)
        const tokens = shownTokens(workspace)
        for (const { at, message } of outcome.problems) {
          expect(message.replace(/\bdB\b/g, '')).not.toMatch(/[a-z][A-Z]|\[|undefined|NaN|null|Infinity|\de[+-]?\d/)
          expect(message).toMatch(/^[A-Z].*\.$/)
          expect(tokens).toContain(at)
        }
      }),
      { numRuns: 250 },
    )
  })
})

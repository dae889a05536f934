import { renderToStaticMarkup } from 'react-dom/server'
import { afterEach, describe, expect, test } from 'vitest'
import type { StageSpec } from '../../src/filter/stage.ts'
import { FrequencyFigure } from '../../src/page/frequency-figure.tsx'
import { KernelFigure } from '../../src/page/kernel-figure.tsx'
import { evaluate } from '../../src/state/evaluate.ts'
import type { Evaluation } from '../../src/state/evaluation.ts'
import { look, viewStore } from '../../src/state/view.ts'
import { type BuiltSource, startWorkspace, type Workspace } from '../../src/state/workspace.ts'

const highPass: StageSpec = {
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [1],
  meaning: 'half-amplitude',
  direction: 'both',
}
const start = startWorkspace()

const known = new Map<string, { workspace: Workspace; evaluation: Evaluation }>()

function evaluated(chain: StageSpec[], samplingRateHz = 500): { workspace: Workspace; evaluation: Evaluation } {
  const key = JSON.stringify([chain, samplingRateHz])
  const before = known.get(key)
  if (before) return before
  const source: BuiltSource = { ...(start.source as BuiltSource), samplingRateHz }
  const workspace = { ...start, source, chain }
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ message }) => message).join('; '))
  const found = { workspace, evaluation: outcome.evaluation }
  known.set(key, found)
  return found
}

const frequency = (chain: StageSpec[], width = 476, samplingRateHz = 500) =>
  renderToStaticMarkup(
    <FrequencyFigure {...evaluated(chain, samplingRateHz)} caption={() => ''} height={178} width={width} />,
  )
const kernel = (chain: StageSpec[], width = 476, samplingRateHz = 500) =>
  renderToStaticMarkup(
    <KernelFigure
      evaluation={evaluated(chain, samplingRateHz).evaluation}
      caption={() => ''}
      height={148}
      width={width}
    />,
  )

/** Texts drawn in a figure's plot area and around it. */
const texts = (markup: string) =>
  [...markup.matchAll(/<text[^>]*>(.*?)<\/text>/g)].map(([, text]) => text.replace(/<[^>]*>/g, ''))

const initial = viewStore.getState()
// drawing without a browser reads a store's first state; here it is to read the present one
viewStore.getInitialState = () => viewStore.getState()
afterEach(() => viewStore.setState(initial, true))

describe('frequency figure', () => {
  test('it has a name, and a description with its numbers', () => {
    const markup = frequency(start.chain)
    expect(markup).toMatch(/role="group" aria-labelledby="[^"]+-title"/)
    expect(markup).toContain('<title id=')
    expect(markup).toContain('half the amplitude at 1.00 Hz and 30.0 Hz and half the power at 1.25 Hz and 29.1 Hz')
  })

  test('curves and points are named where they run', () => {
    const found = texts(frequency(start.chain))
    for (const name of ['whole chain', 'high-pass', 'low-pass', 'waveform', 'after', 'taken out', 'noise, log scale'])
      expect(found).toContain(name)
    for (const point of ['1.00 Hz', '30.0 Hz', '1.25 Hz', '29.1 Hz']) expect(found).toContain(point)
  })

  test('every cutoff that runs here is a slider with a name and a value', () => {
    const markup = frequency(start.chain)
    expect(markup).toContain('aria-label="high-pass, half-amplitude cutoff"')
    expect(markup).toContain('aria-valuetext="1.00 Hz"')
    expect(frequency([{ ...highPass, inData: true }])).not.toContain('high-pass, half-amplitude cutoff')
  })

  test('the cursor can be reached by keyboard and says frequency and gain', () => {
    expect(frequency(start.chain)).toMatch(
      /aria-label="frequency cursor"[^>]*aria-valuetext="[\d.]+ Hz: \d+ %, [−\d.]+ dB"/,
    )
  })

  test('in dB the axis goes down from 0, and the head says so', () => {
    look({ gainUnit: 'dB' })
    const markup = frequency(start.chain)
    expect(texts(markup)).toEqual(expect.arrayContaining(['0', '−20', '−40', '−60']))
    expect(markup).toContain('gain in: dB; switch to per cent of amplitude')
  })

  test('phase and group delay are drawn on request; a zero-phase chain has neither, in words', () => {
    look({ frequencyShows: 'phase' })
    expect(texts(frequency([highPass]))).toContain('whole chain: zero-phase')
    look({ frequencyShows: 'group delay' })
    expect(texts(frequency([highPass]))).toContain('whole chain: no delay at any frequency')
    expect(frequency([{ ...highPass, direction: 'forward' }])).toMatch(
      /Group delay in milliseconds .* between [−\d.]+ ms and/,
    )
  })
})

describe('kernel figure', () => {
  test('it has a name, a description with its numbers, and says its reach', () => {
    const markup = kernel(start.chain)
    expect(markup).toMatch(/role="img" aria-labelledby="[^"]+-title"/)
    expect(markup).toContain('Impulse response of the stages applied here, between')
    expect(texts(markup)).toContain('reach −844 to 844 ms')
  })

  test('a step response says the value that it settles at, and where it stands if it has not settled', () => {
    look({ kernelShows: 'step response' })
    expect(texts(kernel([{ ...highPass, pass: 'low', cutoffsHz: [30] }]))).toContain('final value 1')
    expect(texts(kernel([highPass]))).toContain('final value 0')
    const slow = texts(kernel([{ ...highPass, cutoffsHz: [0.05] }])).find((text) => text.endsWith('final value 0'))
    expect(slow).toMatch(/^[−\d.]+ at \d+ ms, final value 0$/)
  })

  test('an empty chain is said in words, and so is one that does not run here', () => {
    expect(texts(kernel([]))).toEqual(expect.arrayContaining(['no filter', 'the kernel is a single impulse']))
    expect(texts(kernel([{ ...highPass, inData: true }]))).toContain('no filter applied here')
    look({ kernelShows: 'step response' })
    expect(texts(kernel([]))).toContain('a step passes unchanged')
  })
})

test('from one stage to six, at any sampling rate and width, in every view, no coordinate is without a number', () => {
  const six = (fs: number): StageSpec[] => [
    { design: 'amplifier', pass: 'high', order: 1, cutoffHz: 0.016 },
    { design: 'amplifier', pass: 'low', order: 4, cutoffHz: fs / 5 },
    { ...highPass, cutoffsHz: [0.5] },
    { ...highPass, pass: 'low', cutoffsHz: [fs / 16], direction: 'forward' },
    { design: 'notch', frequencyHz: fs / 8, bandwidthHz: 2, harmonics: 1, direction: 'both' },
    { design: 'moving-average', durationMs: 40, delay: 'compensated' },
  ]
  for (const fs of [100, 500, 4096]) {
    for (const width of [358, 476, 900]) {
      for (const chain of [[], six(fs).slice(2, 3), six(fs)]) {
        for (const shows of ['gain', 'phase', 'group delay'] as const) {
          const response = shows === 'gain' ? 'impulse response' : 'step response'
          look({
            frequencyShows: shows,
            gainUnit: width === 476 ? 'dB' : 'percent',
            kernelShows: response,
            kernelScale: width === 476 ? 'linear' : 'compressed',
          })
          for (const markup of [frequency(chain, width, fs), kernel(chain, width, fs)]) {
            expect(markup).not.toMatch(/"[^"]*(NaN|Infinity|undefined)[^"]*"/)
          }
        }
      }
    }
  }
})

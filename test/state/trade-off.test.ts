import { describe, expect, test } from 'vitest'
import { BATCH_DRAWS } from '../../src/evidence/simulated-score.ts'
import { computeCell, planMap, prepareMap } from '../../src/evidence/trade-off-map.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import {
  answerOfRow,
  bestOfAllRows,
  cellInChain,
  firstRow,
  mapCsv,
  mapFigures,
  nearestComputed,
  noiseError,
} from '../../src/state/map-figures.ts'
import { mapStore, orderOfWork, runMap, runMaps, type Slice } from '../../src/state/map-run.ts'
import { mapSlice } from '../../src/state/map-worker.ts'
import {
  aboutKind,
  biasOfRest,
  comparedKinds,
  type FilterKind,
  filterInChain,
  limitsInUnit,
  mapCandidate,
  mapLimits,
  mapPlace,
  mapRequest,
  type MapRequest,
  TRIALS_RULE,
  varyingStage,
  withFilter,
} from '../../src/state/trade-off.ts'
import {
  DIFFERENCE,
  readWorkspace,
  SCENARIOS,
  startWorkspace,
  type TradeOff,
  type Workspace,
  workspaceOf,
} from '../../src/state/workspace.ts'
import { madeUpWorkspace } from './made-up-table.ts'

const start: Workspace = {
  ...startWorkspace(),
  score: { kind: 'mean', fromMs: 300, toMs: 500, polarity: 'positive' },
}
const asking = (change: Partial<TradeOff>, workspace = start): Workspace => ({
  ...workspace,
  tradeOff: { ...workspace.tradeOff, ...change },
})
const small = asking({ rollOffs: [1, 2] })

function requestOf(workspace: Workspace): MapRequest {
  const outcome = mapRequest(workspace, null)
  if (!outcome.ok) throw new Error(outcome.reason)
  return outcome.request
}

const here: Slice = (key, question, order, batches, budgetMs, before) =>
  Promise.resolve(mapSlice(key, question, order, batches, budgetMs, before))

async function mapOf(workspace: Workspace) {
  const request = requestOf(workspace)
  await runMap(request, here, new AbortController().signal)
  const state = mapStore.getState().maps[request.key]
  return { request, state, figures: mapFigures(request, state, workspace.tradeOff.over, mapLimits(workspace, null)) }
}

describe('what the map varies', () => {
  test('is the first high-pass that is applied here, at its place', () => {
    expect(mapPlace(start)).toEqual({ at: 1, replaces: true })
    expect(mapCandidate(start)).toEqual({
      ...{ design: 'butterworth', pass: 'high', meaning: 'half-amplitude', direction: 'both' },
    })
  })

  test('is a new stage at the end where there is none, or where one is asked for', () => {
    expect(mapPlace({ ...start, chain: [start.chain[0]] })).toEqual({ at: 1, replaces: false })
    expect(mapPlace(asking({ stage: 'insert' }))).toEqual({ at: 3, replaces: false })
    // a stage that is gone, and an amplifier, are chosen anew
    expect(mapPlace(asking({ stage: 7 }))).toEqual({ at: 1, replaces: true })
    expect(mapPlace(asking({ stage: 0 }))).toEqual({ at: 1, replaces: true })
  })

  test('a stage that is chosen brings its own design, pass and window', () => {
    const low = varyingStage(start, 2)
    expect(low.tradeOff).toMatchObject({ stage: 2, pass: 'low', design: 'windowed-sinc', direction: 'both' })
    expect(mapCandidate(low)).toMatchObject({ window: { name: 'hamming' }, delay: 'compensated' })
    expect(filterInChain(low)).toEqual({ cutoffHz: 30, rollOff: 7.5 })
  })

  test('a picked filter stands in the chain as the map has computed it, and asks no other map', () => {
    const picked = withFilter(start, 0.15, 3)
    expect(picked.chain[1]).toEqual({ ...start.chain[1], order: 3, cutoffsHz: [0.15] })
    expect(filterInChain(picked)).toEqual({ cutoffHz: 0.15, rollOff: 3 })
    expect(requestOf(picked).key).toBe(requestOf(start).key)
    const inserted = withFilter(asking({ stage: 'insert' }), 0.15, 3)
    expect(inserted.chain).toHaveLength(4)
    // the next one that is picked takes its place
    expect(withFilter(inserted, 0.2, 3).chain).toHaveLength(4)
  })
})

describe('kinds that are compared', () => {
  const forward: FilterKind = { design: 'butterworth', direction: 'forward' }
  const sinc: FilterKind = { design: 'windowed-sinc', direction: 'both' }

  test('are the desk’s own and those beside it, each once', () => {
    const own: FilterKind = { design: 'butterworth', direction: 'both' }
    expect(comparedKinds(start.tradeOff)).toEqual([own])
    expect(comparedKinds({ ...start.tradeOff, beside: [sinc, own, forward, sinc] })).toEqual([own, sinc, forward])
  })

  test('have the same cutoffs and waveforms, and roll-offs of their own where the design is another', () => {
    const several = asking({ rollOffs: [2, 4], beside: [forward, sinc] })
    const [a, b, c] = comparedKinds(several.tradeOff).map((kind) => requestOf(aboutKind(several, kind)).question)
    expect(b.cutoffsHz).toEqual(a.cutoffsHz)
    expect(c.cutoffsHz).toEqual(a.cutoffsHz)
    expect(b.rollOffs).toEqual([2, 4])
    expect(c.rollOffs).toEqual([0.1, 0.2, 0.5, 1, 2, 4])
    expect(b.candidate).toEqual({ ...a.candidate, direction: 'forward' })
    expect(c.candidate).toMatchObject({ design: 'windowed-sinc', pass: 'high', delay: 'compensated' })
    // beside or alone, it is one map
    expect(requestOf(several).key).toBe(requestOf(asking({ rollOffs: [2, 4] })).key)
  })

  test('a filter picked from another kind takes the place, and asks no other map of any kind', () => {
    const half: Workspace = {
      ...asking({ beside: [forward, sinc] }),
      chain: start.chain.map((spec, i) =>
        i === 1 && spec.design === 'butterworth' ? { ...spec, meaning: 'half-power' } : spec,
      ),
    }
    const picked = withFilter(half, 0.5, 1, sinc)
    expect(picked.chain[1]).toEqual({
      ...{ design: 'windowed-sinc', pass: 'high', meaning: 'half-power', window: { name: 'hamming' } },
      ...{ delay: 'compensated', transitionHz: 1, cutoffsHz: [0.5] },
    })
    expect(picked.tradeOff).toEqual(half.tradeOff)
    for (const kind of comparedKinds(half.tradeOff)) {
      expect(requestOf(aboutKind(picked, kind)).key).toBe(requestOf(aboutKind(half, kind)).key)
    }
    expect(filterInChain(picked)).toBeNull()
    expect(filterInChain(aboutKind(picked, sinc))).toEqual({ cutoffHz: 0.5, rollOff: 1 })
  })

  test('of all rows the allowed filter with the least total error is the best; that none is allowed is said of a whole map only', async () => {
    const { figures } = await mapOf(small)
    const best = bestOfAllRows(figures)
    if (typeof best === 'string') throw new Error(best)
    const allowed = figures.cells.filter((_, i) => figures.kept[i]).map((cell) => cell?.totalError as number)
    expect(best.totalError).toBe(Math.min(...allowed))
    const none = { ...figures, kept: figures.kept.map(() => false) }
    expect(bestOfAllRows(none)).toBe('none')
    expect(bestOfAllRows({ ...none, cells: [null, ...figures.cells.slice(1)] })).toBe('not known')
  })
})

describe('the question', () => {
  test('stays the same for other limits, layers and trials of a linear score', () => {
    const key = requestOf(start).key
    expect(requestOf(asking({ limits: { noise: 1 }, layer: 'noise', over: 'typical' })).key).toBe(key)
    expect(requestOf({ ...start, trials: 400 }).key).toBe(key)
    expect(requestOf(asking({ layer: 'latency shift' })).key).not.toBe(key)
    const peak: Workspace = { ...start, score: { ...start.score, kind: 'peak-latency' } }
    expect(requestOf({ ...peak, trials: 400 }).key).not.toBe(requestOf(peak).key)
  })

  test('of a difference has twice the variance, and interference that is locked to the event cancels', () => {
    const shown = {
      ...start.shown,
      chosen: DIFFERENCE,
      difference: { first: 'rare targets', second: 'frequent standards' },
    }
    const noise = { ...start.noise, lines: [{ hz: 60, amplitudeUv: 1, locked: true }] }
    const request = requestOf({ ...start, shown, noise })
    expect(request.trials).toBe(start.trials / 2)
    expect(request.question.noise).toMatchObject({ lines: [] })
    expect(mapRequest({ ...start, shown, trials: 1 }, null)).toEqual({
      ...{ ok: false, reason: 'A difference needs at least 2 trials of each condition.' },
    })
  })

  test('of a robust map is over the waveform as built and 64 others', () => {
    const request = requestOf(asking({ robust: { latencyMs: 50, widthPercent: 20, amplitudePercent: 30 } }))
    expect(request.question.waveforms).toHaveLength(65)
    expect(request.largest).toHaveLength(65)
  })

  test('of a loaded table can be the average over its conditions', () => {
    const { workspace, table } = madeUpWorkspace()
    const values = (of: TradeOff['waveform']) => {
      const outcome = mapRequest(asking({ waveform: of }, workspace), table)
      if (!outcome.ok) throw new Error(outcome.reason)
      const [waveform] = outcome.request.question.waveforms
      if (waveform.kind !== 'recorded') throw new Error('not recorded')
      return waveform.values
    }
    const each = ['rare', 'frequent'].map((chosen) => {
      const outcome = mapRequest({ ...workspace, shown: { ...workspace.shown, chosen } }, table)
      if (!outcome.ok) throw new Error(outcome.reason)
      const [waveform] = outcome.request.question.waveforms
      return waveform.kind === 'recorded' ? waveform.values : new Float64Array()
    })
    values('average').forEach((value, i) => expect(value).toBeCloseTo((each[0][i] + each[1][i]) / 2, 12))
  })

  test('that cannot be asked says why', () => {
    expect(mapRequest(asking({ fromHz: 3, toHz: 1 }), null)).toMatchObject({
      ok: false,
      reason: expect.stringMatching(/range upwards/),
    })
  })
})

describe('limits', () => {
  test('the bias accepted is the limit of the score, unless the desk has its own or none', () => {
    expect(mapLimits(start, 6.5)).toEqual({ bias: 0.2 })
    expect(mapLimits(asking({ limits: { bias: 0.5, noise: 1 } }), 6.5)).toEqual({ bias: 0.5, noise: 1 })
    expect(mapLimits(asking({ limits: { bias: 'none' } }), 6.5)).toEqual({})
    const percent: Workspace = { ...start, limits: { score: { value: 10, unit: '%' } } }
    expect(mapLimits(percent, 6.5)).toEqual({ bias: 0.65 })
    expect(mapLimits({ ...start, limits: { score: { value: 10, unit: 'ms' } } }, 6.5)).toEqual({})
  })
})

describe('a map that is computed', () => {
  test('says of the filter in the chain what the readout says', async () => {
    const { request, figures } = await mapOf(small)
    const { cutoffsHz } = request.question
    for (const [column, row] of [
      [10, 0],
      [40, 1],
      [59, 1],
    ]) {
      const cell = figures.cells[row * cutoffsHz.length + column]
      const outcome = evaluate(withFilter(small, cutoffsHz[column], row + 1), null)
      if (!outcome.ok || !cell) throw new Error('nothing to compare')
      const { rows, precision } = outcome.evaluation
      expect(cell.bias).toBeCloseTo(rows[0].change as number, 6)
      expect(cell.noise).toBeCloseTo(precision?.after as number, 4)
      expect(cell.equalTrialsFactor).toBeCloseTo(precision?.equalTrialsFactor as number, 3)
    }
  })

  test('knows the filter in the chain by its row and nearest cutoff, and none that it does not hold', async () => {
    const { request } = await mapOf(small)
    const { cutoffsHz } = request.question
    const at = cellInChain(small, request) as number
    expect(Math.floor(at / cutoffsHz.length)).toBe(1)
    expect(cutoffsHz[at % cutoffsHz.length]).toBeCloseTo(1, 1)
    expect(cellInChain(withFilter(small, 10, 2), request)).toBeNull()
    expect(cellInChain(withFilter(small, 1, 5), request)).toBeNull()
  })

  test('is drawn whole from its first slice on, each cell as the nearest that is computed', async () => {
    const request = requestOf(asking({ rollOffs: [3, 4] }))
    const stop = new AbortController()
    let calls = 0
    await runMap(
      request,
      (key, question, order, batches) => {
        if (++calls > 3) stop.abort()
        return Promise.resolve(mapSlice(key, question, order.slice(0, 6), batches, 1e4))
      },
      stop.signal,
    )
    const state = mapStore.getState().maps[request.key]
    expect(state.status).toBe('cancelled')
    expect(state.done).toBe(18)
    const figures = mapFigures(request, state, 'worst', {})
    const drawn = nearestComputed(figures, 60, 2)
    expect(drawn.every((cell) => cell !== null)).toBe(true)
    figures.cells.forEach((cell, i) => {
      if (cell) expect(drawn[i]).toBe(cell)
    })
    // and goes on where it was
    let asked = 0
    await runMap(
      request,
      (...args) => {
        asked ||= args[2].length
        return here(...args)
      },
      new AbortController().signal,
    )
    expect(asked).toBe(120 - 18)
    expect(mapStore.getState().maps[request.key].status).toBe('complete')
  })

  test('that was seen before is not computed again', async () => {
    const { request } = await mapOf(small)
    await runMap(request, () => Promise.reject(new Error('asked again')), new AbortController().signal)
    expect(mapStore.getState().maps[request.key].status).toBe('complete')
  })

  test('that fails says why', async () => {
    const request = requestOf(asking({ rollOffs: [5] }))
    await runMap(request, () => Promise.reject(new Error('no worker')), new AbortController().signal)
    expect(mapStore.getState().maps[request.key]).toMatchObject({ status: 'failed', reason: 'no worker' })
  })

  test('of a simulated score gets more draws round by round, the same as at one go', async () => {
    const peak: Workspace = asking(
      { rollOffs: [2] },
      { ...start, score: { kind: 'peak-latency', fromMs: 200, toMs: 700, polarity: 'positive' } },
    )
    const request = requestOf(peak)
    const few: MapRequest = {
      ...request,
      question: { ...request.question, cutoffsHz: [0.1, 1] },
      key: `${request.key} of two`,
    }
    const seen: number[] = []
    const stop = mapStore.subscribe(({ maps }) => {
      const draws = maps[few.key]?.draws
      if (draws !== undefined && !seen.includes(draws)) seen.push(draws)
    })
    await runMap(few, here, new AbortController().signal)
    stop()
    expect(seen).toEqual([0, 200, 800, 2000])
    const state = mapStore.getState().maps[few.key]
    const whole = computeCell(prepareMap(few.question), 1, { from: 0, to: 2000 / BATCH_DRAWS })
    const sums = state.cells[1]?.scores[0].simulated?.[0]
    expect(sums?.found).toBe(whole.scores[0].simulated?.[0].found)
    expect(sums?.powers[1]).toBeCloseTo(whole.scores[0].simulated?.[0].powers[1] as number, 6)
    const error = noiseError(state, 1) as number
    const noise = mapFigures(few, state, 'worst', {}).cells[1]?.noise as number
    // of a standard deviation from n normal draws: σ/√(2n)
    expect(error / noise).toBeGreaterThan(0.5 / Math.sqrt(2 * 2000))
    expect(error / noise).toBeLessThan(4 / Math.sqrt(2 * 2000))
  }, 30_000)

  test('is the same with three workers as with one, which are given its cells in the order of the plan', async () => {
    const peak: Workspace = asking(
      { rollOffs: [2] },
      { ...start, score: { kind: 'peak-latency', fromMs: 200, toMs: 700, polarity: 'positive' } },
    )
    const request = requestOf(peak)
    const of = (name: string): MapRequest => ({
      ...request,
      question: { ...request.question, cutoffsHz: request.question.cutoffsHz.slice(0, 16) },
      key: `${request.key} ${name}`,
    })
    const signal = new AbortController().signal
    await runMap(of('by one'), here, signal, { rounds: 1 })
    const given: number[] = []
    let asked = 0
    let atOnce = 0
    let most = 0
    // slow workers that do only half of what they are given, the last given first
    const slow: Slice = async (...args) => {
      const [key, question, order, batches, , before] = args
      if (before) asked++
      given.push(order[0])
      most = Math.max(most, ++atOnce)
      await new Promise((resolve) => setTimeout(resolve, 20 - 3 * (given.length % 5)))
      atOnce--
      return mapSlice(key, question, order.slice(0, Math.ceil(order.length / 2)), batches, 1e4, before)
    }
    await runMap(of('by three'), slow, signal, { workers: 3, rounds: 1 })
    const { maps } = mapStore.getState()
    const [one, three] = ['by one', 'by three'].map((name) => maps[of(name).key])
    expect(three.cells.every((cell) => cell !== null)).toBe(true)
    expect(three.cells).toEqual(one.cells)
    expect(three.before).toEqual(one.before)
    expect(three.draws).toBe(200)
    // the unfiltered scores are drawn once
    expect(asked).toBe(1)
    expect(most).toBe(3)
    const { order } = planMap(16, 1)
    expect(given.slice(0, 3)).toEqual([order[0], order[4], order[8]])
  })

  test('of several comes round by round, and all are stopped by one cancel', async () => {
    const latency: Workspace = {
      ...start,
      score: { kind: 'peak-latency', fromMs: 200, toMs: 700, polarity: 'positive' },
    }
    const requests = [2, 3].map((order): MapRequest => {
      const request = requestOf(asking({ rollOffs: [order] }, latency))
      const question = { ...request.question, cutoffsHz: [0.1, 1] }
      return { ...request, question, key: `${request.key} of several` }
    })
    const stop = new AbortController()
    const asked: string[] = []
    const states = () => requests.map(({ key }) => mapStore.getState().maps[key])
    await runMaps(
      requests,
      (...args) => {
        asked.push(`${requests.findIndex(({ key }) => key === args[0])} from ${args[3].from}`)
        if (args[3].from === 4) stop.abort()
        return here(...args)
      },
      stop.signal,
    )
    expect([...new Set(asked)]).toEqual(['0 from 0', '1 from 0', '0 from 4'])
    expect(states().map(({ status, draws }) => [status, draws])).toEqual([
      ['cancelled', 200],
      ['cancelled', 200],
    ])
    await runMaps(requests, here, new AbortController().signal, 2)
    expect(states().map(({ status, draws }) => [status, draws])).toEqual([
      ['complete', 2000],
      ['complete', 2000],
    ])
  }, 30_000)

  test('is saved with a line for every filter, and the sentence', async () => {
    const { request, figures } = await mapOf(small)
    const lines = mapCsv([{ figures, request }], small).trim().split(/\r?\n/)
    expect(lines).toHaveLength(1 + 120 + 1)
    expect(lines[1].startsWith('0.01,1,')).toBe(true)
    expect(lines[121].startsWith('protocol,')).toBe(true)
    const forward = await mapOf(aboutKind(small, { design: 'butterworth', direction: 'forward' }))
    const both = mapCsv([{ figures, request }, forward], small).trim().split(/\r?\n/)
    expect(both).toHaveLength(1 + 240 + 1)
    expect(both[0].startsWith('kind of filter,cutoff (Hz),order of one pass,')).toBe(true)
    expect(both[1]).toBe(`Butterworth high-pass run both ways,${lines[1]}`)
    expect(both[121].startsWith('Butterworth high-pass run forward,0.01,1,')).toBe(true)
  })
})

test('a workspace of before the desk reads with its defaults', () => {
  const { tradeOff: _, noiseFrom: __, ...old } = startWorkspace()
  const read = readWorkspace(JSON.parse(JSON.stringify(old)))
  expect(read.ok && read.workspace.tradeOff).toEqual(startWorkspace().tradeOff)
  expect(read.ok && read.workspace.noiseFrom).toBe('model')
  const { beside: ___, ...alone } = startWorkspace().tradeOff
  const earlier = readWorkspace({ ...startWorkspace(), tradeOff: alone })
  expect(earlier.ok && earlier.workspace.tradeOff).toEqual(startWorkspace().tradeOff)
})

describe('what a researcher must not be misled by', () => {
  test('a limit written for a score in µV is none for one in ms, and holds again when the score does', () => {
    const limits = { bias: 0.3, noise: 0.5, totalError: 0.7, latencyShiftMs: 4, unit: 'µV' } as const
    const workspace = asking({ limits })
    expect(mapLimits(workspace, null)).toEqual({ bias: 0.3, noise: 0.5, totalError: 0.7, latencyShiftMs: 4 })
    const latency = { ...workspace, score: { ...workspace.score, kind: 'peak-latency' as const } }
    expect(mapLimits(latency, null)).toEqual({ latencyShiftMs: 4 })
    expect(limitsInUnit({ ...workspace.tradeOff, limits: { ...limits, bias: 'none' } }, 'ms')).toEqual({
      ...{ bias: 'none', latencyShiftMs: 4 },
    })
    // written before units were kept: taken as they are
    expect(mapLimits(asking({ limits: { noise: 2 } }, latency), null)).toEqual({ noise: 2 })
  })

  test('a number of trials that is none is refused by its own rule', () => {
    for (const trials of [0, 2.5, -1, 2_000_000, Number.NaN])
      expect(mapRequest({ ...start, trials }, null)).toEqual({ ok: false, reason: TRIALS_RULE })
  })

  test('the rest of the chain has a bias of its own: the map’s, with a filter that takes next to nothing', async () => {
    // the low-pass is varied, and the high-pass of 1 Hz stays
    const workspace = asking({ pass: 'low', design: 'butterworth', fromHz: 100, toHz: 200, rollOffs: [1], stage: 2 })
    const rest = biasOfRest(workspace, null)
    const { figures } = await mapOf(workspace)
    const widest = figures.cells[figures.cells.length - 1]
    expect(rest).toBeLessThan(-0.5)
    expect(rest).toBeCloseTo(widest?.bias as number, 2)
    expect(
      biasOfRest({ ...workspace, chain: [workspace.chain[2]], tradeOff: { ...workspace.tradeOff, stage: 0 } }, null),
    ).toBeNull()
  })

  test('where the waveform has no such score, no filter is called open', async () => {
    const score = { kind: 'peak-latency' as const, fromMs: 380, toMs: 420, polarity: 'negative' as const }
    const { figures } = await mapOf(
      asking({ rollOffs: [2], fromHz: 0.01, toHz: 0.02 }, { ...start, trials: 100_000, score }),
    )
    expect(figures.scoredBefore).toBe(false)
    expect(answerOfRow(figures, 0, 60, {})).toEqual({
      kind: 'nothing',
      reason: 'before any filter there is no such score',
    })
  }, 60_000)

  test('a row that cannot be used gives the reason of its middle, and the map begins with another', async () => {
    // a transition of 0.2 Hz needs a kernel far longer than the epoch; one of 4 Hz about a cutoff of 3 Hz does not
    const workspace = asking(
      { design: 'windowed-sinc', rollOffs: [0.2, 0.3, 4], fromHz: 0.11, toHz: 3 },
      { ...start, extent: 'epochs' },
    )
    const { figures } = await mapOf(workspace)
    const answer = answerOfRow(figures, 1, 60, {})
    expect(answer).toMatchObject({ kind: 'nothing', reason: expect.stringMatching(/needs \d+ samples/) })
    expect(firstRow(figures, 60, 3)).toBe(2)
  })

  test('the row that the desk begins with is whole as soon as the coarse map is', () => {
    expect(requestOf(start).row).toBe(1)
    const order = orderOfWork(60, 8, 1)
    const coarse = planMap(60, 8).levelEnds[0]
    expect([...order].sort((a, b) => a - b)).toEqual(Array.from({ length: 480 }, (_, i) => i))
    expect(order.slice(0, coarse)).toEqual(planMap(60, 8).order.slice(0, coarse))
    expect(new Set(order.slice(0, coarse + 60).map((index) => Math.floor(index / 60)))).toContain(1)
    const second = order.slice(0, coarse + 60).filter((index) => Math.floor(index / 60) === 1)
    expect(second).toHaveLength(60)
    const delayed = SCENARIOS.find(({ id }) => id === 'delayed-peak') as (typeof SCENARIOS)[number]
    // order 4 is the fourth row
    expect(requestOf(workspaceOf(delayed)).row).toBe(3)
  })

  test('the map of a scenario is about the scenario’s own filter', () => {
    const of = Object.fromEntries(SCENARIOS.map((scenario) => [scenario.id, workspaceOf(scenario)]))
    expect(of['smeared-onset'].tradeOff).toMatchObject({ pass: 'low', direction: 'both', fromHz: 5, toHz: 100 })
    expect(of['delayed-peak'].tradeOff).toMatchObject({ pass: 'low', direction: 'forward', design: 'butterworth' })
    expect(mapPlace(of['smeared-onset'])).toEqual({ at: 0, replaces: true })
    expect(of['late-positivity'].tradeOff).toMatchObject({ pass: 'high', direction: 'both', fromHz: 0.01, toHz: 3 })
  })
})

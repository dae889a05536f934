import { describe, expect, test } from 'vitest'
import { actingStages, actOn } from '../../src/evidence/acting-stages.ts'
import { cholesky, solveLower } from '../../src/evidence/cholesky.ts'
import { noiseMatrix } from '../../src/evidence/filtered-noise-covariance.ts'
import {
  fitLateOnly,
  lateOnlyFit,
  lateOnlyModel,
  type LateOnlyOptions,
  latestOnset,
  type OnsetRow,
  robustOf,
  robustVerdict,
  scanBumps,
  scanOnsets,
} from '../../src/evidence/index.ts'
import { raisedCosine } from '../../src/evidence/late-only-model.ts'
import { lateOnlyVerdict, verdictConditions } from '../../src/evidence/late-only-verdict.ts'
import { gramOfRows, transposed } from '../../src/evidence/row-products.ts'
import { drawNoise, type NoiseModel, noiseSource, seededRandom } from '../../src/erp/index.ts'
import { designChain, runContinuous, type StageSpec } from '../../src/filter/index.ts'

const NOISE: NoiseModel = {
  kind: 'model',
  exponent: 1,
  levelAt1HzUv2PerHz: 5,
  flatBelowHz: 0.02,
  whiteUv2PerHz: 0.02,
  lines: [],
}
const highPass = (direction: 'both' | 'forward'): StageSpec => ({
  design: 'butterworth',
  pass: 'high',
  order: 2,
  cutoffsHz: [1],
  meaning: 'half-amplitude',
  direction,
})
const LOW_PASS: StageSpec = {
  design: 'butterworth',
  pass: 'low',
  order: 4,
  cutoffsHz: [30],
  meaning: 'half-amplitude',
  direction: 'both',
}

/** A filtered late positivity of some size from 150 to 650 ms with noise of 40 trials. */
function made(specs: StageSpec[], n: number, rate: number, positivityUv: number, seed: number) {
  const chain = designChain(specs, rate)
  const timesMs = Float64Array.from({ length: n }, (_, i) => -300 + (i * 1000) / rate)
  const around = 4 * rate
  const noise = drawNoise(noiseSource(NOISE, rate, n + 2 * around), seededRandom(seed), 40)[0]
  const x = noise.map((value, i) => {
    const t = -300 + ((i - around) * 1000) / rate
    return value + (t > 150 && t < 650 ? (positivityUv / 2) * (1 - Math.cos((2 * Math.PI * (t - 150)) / 500)) : 0)
  })
  const options: LateOnlyOptions = {
    timesMs,
    t0Ms: 150,
    early: { fromMs: 40, toMs: 120 },
    noise: NOISE,
    trials: 40,
    extent: 'continuous',
  }
  return { chain, options, y: runContinuous(chain.stages, x, around, around + n) }
}

/** What the chain makes of the raised cosine on the early window. */
function filteredBump({ chain, options }: ReturnType<typeof made>): Float64Array {
  const { timesMs, early } = options
  const first = timesMs.findIndex((t) => t >= early.fromMs - 1e-6)
  const last = timesMs.findLastIndex((t) => t <= early.toMs + 1e-6)
  return actOn(actingStages(chain, 'continuous'), raisedCosine(timesMs, early, first, last), first, timesMs.length)
}

describe('verdict', () => {
  const grounds = { interval: [-1, 0.5] as const, largestUv: 2, meanUv: -1.5, noiseOfMeanUv: 0.5, lateShare: 0.7 }
  const verdict = (change: object) => lateOnlyVerdict(verdictConditions({ ...grounds, ...change }))

  test('an interval that excludes zero rules late activity out, whatever else holds', () => {
    expect(verdict({ interval: [0.01, 9], lateShare: 0.9 })).toBe('not by late activity alone')
    expect(verdict({ interval: [-9, -0.01] })).toBe('not by late activity alone')
  })

  test('late activity can only where all four conditions hold', () => {
    expect(verdict({})).toBe('it can')
    expect(verdict({ interval: [-1, 1] })).toBe('cannot be told')
    expect(verdict({ meanUv: -0.97 })).toBe('cannot be told')
    expect(verdict({ lateShare: 0.49 })).toBe('cannot be told')
    expect(verdict({ lateShare: 0.5 })).toBe('it can')
  })
})

describe('late-only fit', () => {
  const quiet = made([highPass('both')], 260, 250, 15, 3)
  const fit = lateOnlyFit(quiet.y, quiet.chain, quiet.options)

  test('a dip that a zero-phase high-pass makes before a large positivity can come from late activity', () => {
    expect(fit.verdict).toBe('it can')
    expect(fit.grounds.meanUv).toBeLessThan(-1)
    expect(fit.lateShare).toBeGreaterThan(0.5)
    expect(fit.lateWaveform.fromMs).toBeCloseTo(120, 9)
  })

  test('an early component of more than 4 standard errors rules late activity out', () => {
    const bump = filteredBump(quiet)
    const y = quiet.y.map((value, i) => value - 6 * fit.standardError * bump[i]!)
    const found = lateOnlyFit(y, quiet.chain, quiet.options)
    expect(found.verdict).toBe('not by late activity alone')
    expect(found.interval[1]).toBeLessThan(0)
  })

  test('what lies along Ke moves β alone, and a constant moves c alone', () => {
    const bump = filteredBump(quiet)
    const moved = lateOnlyFit(
      quiet.y.map((value, i) => value + 3 * bump[i]! - 2),
      quiet.chain,
      quiet.options,
    )
    expect(moved.beta - fit.beta).toBeCloseTo(3, 5)
    expect(moved.constant - fit.constant).toBeCloseTo(-2, 5)
    expect(moved.standardError).toBeCloseTo(fit.standardError, 5)
    expect(moved.noiseScale).toBeCloseTo(fit.noiseScale, 4)
    expect(moved.alphaScale).toBeCloseTo(fit.alphaScale, 3)
  })

  test('a waveform and noise twice as large give twice the amplitude', () => {
    const twice = lateOnlyFit(
      quiet.y.map((value) => 2 * value),
      quiet.chain,
      {
        ...quiet.options,
        noise: { ...NOISE, levelAt1HzUv2PerHz: 20, whiteUv2PerHz: 0.08 },
        sigmaUv: 20,
        roundingUv: 0.02,
      },
    )
    expect(twice.beta / fit.beta).toBeCloseTo(2, 3)
    expect(twice.noiseScale).toBeCloseTo(fit.noiseScale, 3)
  })

  test('the filtered late waveform is what the chain makes of the late waveform', () => {
    const { values, fromMs } = fit.lateWaveform
    const start = Math.round((fromMs - quiet.options.timesMs[0]!) / 4)
    const again = actOn(actingStages(quiet.chain, 'continuous'), values, start, 260)
    for (let i = 0; i < 260; i++) expect(Math.abs(again[i]! - fit.filtered[i]!)).toBeLessThan(1e-3)
  })

  test('a stage that is in the data acts as one that is not', () => {
    const inData = designChain([{ ...highPass('both'), inData: true }], 250)
    expect(lateOnlyFit(quiet.y, inData, quiet.options).beta).toBe(fit.beta)
  })

  test('a causal chain makes nothing before the late activity, so that it never can', () => {
    for (let seed = 1; seed <= 6; seed++) {
      const causal = made([highPass('forward')], 260, 250, 15, seed)
      const bump = filteredBump(causal)
      for (const amplitudeUv of [0, -2]) {
        const y = causal.y.map((value, i) => value + amplitudeUv * bump[i]!)
        // a window that ends before the late activity can begin
        const options = { ...causal.options, early: { fromMs: 40, toMs: 112 } }
        const { verdict, lateShare } = lateOnlyFit(y, causal.chain, options)
        expect(Math.abs(lateShare)).toBeLessThan(1e-9)
        expect(verdict).not.toBe('it can')
      }
    }
  })

  test('the lowest cosines of a long waveform give β and its error as all samples do, to 2 % of the error', () => {
    for (const [specs, rate] of [
      [[highPass('both'), LOW_PASS], 500],
      [[highPass('both')], 500],
    ] as const) {
      const long = made([...specs], 650, rate, 15, 5)
      const model = lateOnlyModel(long.chain, long.options)
      expect(model.size).toBe(512)
      const { beta, standardError, noiseScale, alphaScale } = fitLateOnly(model, long.y)
      const n = 650
      const m = gramOfRows(transposed(model.columns.filtered, model.columns.count, n), n, model.columns.count)
      const ofNoise = noiseMatrix(model.noise, null)
      const ofAlpha = noiseMatrix(model.alpha, null)
      for (let i = 0; i < m.length; i++) m[i]! += noiseScale * ofNoise[i]! + alphaScale * ofAlpha[i]!
      for (let i = 0; i < n; i++) m[i * (n + 1)]! += 1e-4
      const bump = filteredBump(long)
      const columns = new Float64Array(3 * n)
      for (let i = 0; i < n; i++) columns.set([bump[i]!, 1, long.y[i]!], 3 * i)
      solveLower(cholesky(m, n), columns, 3)
      const inner = (p: number, q: number) => {
        let sum = 0
        for (let i = 0; i < n; i++) sum += columns[3 * i + p]! * columns[3 * i + q]!
        return sum
      }
      const determinant = inner(0, 0) * inner(1, 1) - inner(0, 1) ** 2
      const wanted = (inner(1, 1) * inner(0, 2) - inner(0, 1) * inner(1, 2)) / determinant
      expect(Math.abs(beta - wanted)).toBeLessThan(0.02 * standardError)
      expect(Math.abs(standardError / Math.sqrt(inner(1, 1) / determinant) - 1)).toBeLessThan(0.01)
    }
  })
})

describe('hard inputs', () => {
  test('1500 samples behind a slow high-pass and a steep low-pass are fitted', () => {
    const steep: StageSpec = { ...LOW_PASS, order: 12, cutoffsHz: [10] }
    const slow: StageSpec = { ...highPass('both'), order: 4, cutoffsHz: [0.1] } as StageSpec
    const { y, chain, options } = made([slow, steep], 1500, 500, 10, 2)
    const { beta, standardError, noiseScale } = lateOnlyFit(y, chain, options)
    expect(Number.isFinite(beta)).toBe(true)
    expect(standardError).toBeGreaterThan(0)
    expect(noiseScale).toBeGreaterThan(0.2)
    expect(noiseScale).toBeLessThan(5)
  })

  test('a waveform of zeros has no early component and nothing can be told of it', () => {
    const { chain, options } = made([highPass('both')], 200, 250, 0, 1)
    const { beta, verdict, lateShare } = lateOnlyFit(new Float64Array(200), chain, options)
    expect(beta).toBe(0)
    expect(lateShare).toBe(0)
    expect(verdict).toBe('cannot be told')
  })

  test('what cannot be fitted is refused with what, rule and value', () => {
    const { y, chain, options } = made([highPass('both')], 200, 250, 0, 1)
    const refused = (change: Partial<LateOnlyOptions>) => () => lateOnlyFit(y, chain, { ...options, ...change })
    expect(refused({ lengthMs: 10 })).toThrow(/lengthMs must be finite and at least 15, was 10/)
    expect(refused({ trials: 0 })).toThrow(/trials must be finite and at least 1, was 0/)
    expect(refused({ t0Ms: 900 })).toThrow(/t0Ms must lie in the epoch/)
    expect(refused({ onsetSlackMs: -1 })).toThrow(/onsetSlackMs must be finite and at least 0, was -1/)
    expect(refused({ early: { fromMs: 50, toMs: 58 } })).toThrow(/early window must last at least 4 samples/)
    expect(refused({ early: { fromMs: -400, toMs: 50 } })).toThrow(/early window must lie in the epoch/)
    expect(refused({ timesMs: options.timesMs.map((t) => 2 * t) })).toThrow(
      /sampling rate \(every 4 ms\), had every 8 ms/,
    )
    expect(refused({ sigmaUv: NaN })).toThrow(/sigmaUv/)
    expect(() => lateOnlyFit(y.subarray(1), chain, options)).toThrow(/one value per time/)
    expect(() =>
      lateOnlyFit(
        y.map((v, i) => (i === 7 ? NaN : v)),
        chain,
        options,
      ),
    ).toThrow(/finite numbers, y\[7\]/)
  })
})

describe('robust verdict', () => {
  test('it stands where larger and smoother late activity change nothing, and falls where one does', () => {
    const { y, chain, options } = made([highPass('both')], 200, 250, 15, 3)
    const robust = robustVerdict(y, chain, options)
    expect(robust.variants.map(({ sigmaUv, lengthMs }) => [sigmaUv, lengthMs])).toEqual([
      [50, 15],
      [10, 30],
    ])
    const agree = robust.variants.every(({ verdict }) => verdict === robust.fit.verdict)
    expect(robust.changed).toBe(!agree)
    expect(robust.verdict).toBe(agree ? robust.fit.verdict : 'cannot be told')
    const [one, other] = robust.variants
    const fit = { ...robust.fit, verdict: 'it can' as const }
    expect(
      robustOf(
        fit,
        [one!, other!].map((v) => ({ ...v, verdict: 'it can' as const })),
      ).verdict,
    ).toBe('it can')
    expect(robustOf(fit, [one!, { ...other!, verdict: 'not by late activity alone' }]).verdict).toBe('cannot be told')
  })
})

describe('scan over the onset', () => {
  const { y, chain, options } = made([highPass('both')], 200, 250, 0, 4)

  test('a true early component is allowed by early onsets only, and rows that are known are not computed again', () => {
    const bump = filteredBump({ y, chain, options })
    const early = y.map((value, i) => value + 8 * bump[i]!)
    const scan = scanOnsets(early, chain, options, { fromMs: 40, toMs: 180, stepMs: 28 })
    const seen: OnsetRow[] = []
    let step = scan.next()
    for (; !step.done; step = scan.next()) {
      seen.push(step.value.row)
      expect(step.value).toMatchObject({ done: seen.length, total: 6 })
    }
    expect(step.value.rows.map(({ t0Ms }) => t0Ms)).toEqual([40, 68, 96, 124, 152, 180])
    expect(step.value.beyond).toBe('inside')
    expect(step.value.latestMs).toBeLessThan(124)

    const known = seen.map((row) => ({ ...row, beta: 123 }))
    const again = scanOnsets(early, chain, options, { fromMs: 40, toMs: 180, stepMs: 28 }, known)
    expect([...again].every(({ row }) => row.beta === 123)).toBe(true)
  })

  test('the latest onset is the last before the first that is ruled out', () => {
    const row = (t0Ms: number, out: boolean): OnsetRow => {
      const verdict = out ? 'not by late activity alone' : 'cannot be told'
      return { t0Ms, beta: 0, interval: [0, 0], z: 0, verdict }
    }
    expect(latestOnset([row(1, false), row(2, false), row(3, true), row(4, false)])).toEqual({
      latestMs: 2,
      beyond: 'inside',
    })
    expect(latestOnset([row(1, true)])).toEqual({ latestMs: null, beyond: 'before the scan' })
    expect(latestOnset([row(1, false)])).toEqual({ latestMs: 1, beyond: 'after the scan' })
  })

  test('a range outside the epoch is refused', () => {
    expect(() => scanOnsets(y, chain, options, { fromMs: -900, toMs: 100 }).next()).toThrow(
      /scan must lie in the epoch/,
    )
  })
})

describe('scan over bumps', () => {
  const base = made([highPass('both')], 200, 250, 10, 4)
  const run = (y: Float64Array, bumps: Parameters<typeof scanBumps>[3]) => {
    const scan = scanBumps(y, base.chain, base.options, bumps)
    let step = scan.next()
    let last = 0
    while (!step.done) {
      expect(step.value.done).toBe(++last)
      step = scan.next()
      if (!step.done) expect(step.value.total).toBeGreaterThanOrEqual(step.value.done)
    }
    return step.value
  }

  test('the bump on the stated window has the z, amplitude and error of the fit', () => {
    const fit = lateOnlyFit(base.y, base.chain, base.options)
    const { rows } = run(base.y, { widthsMs: [80], fromMs: 40, toMs: 120, draws: 100 })
    expect(rows).toHaveLength(1)
    expect(rows[0]!.z).toBeCloseTo(fit.z, 6)
    expect(rows[0]!.amplitudeUv).toBeCloseTo(fit.beta, 6)
    expect(rows[0]!.standardError).toBeCloseTo(fit.standardError, 6)
  })

  test('one bump exceeds 1.96 in 5 % of draws, and the largest of many a higher level', () => {
    const one = run(base.y, { widthsMs: [80], fromMs: 40, toMs: 120, draws: 4000 })
    // the standard error of a 95 % point of 4000 draws is 0.03
    expect(Math.abs(one.criticalZ - 1.96)).toBeLessThan(0.12)
    const many = run(base.y, { draws: 1000 })
    expect(many.rows.length).toBeGreaterThan(20)
    expect(many.criticalZ).toBeGreaterThan(2.4)
    expect(many.criticalZ).toBeLessThan(3.6)
  })

  test('a true bump is found at its place, and the same seed gives the same level', () => {
    const bump = filteredBump(base)
    const y = base.y.map((value, i) => value + 8 * bump[i]!)
    const found = run(y, { draws: 500, seed: 9 })
    expect(found.level).toBeLessThan(0.05)
    expect(Math.abs((found.strongest.fromMs + found.strongest.toMs) / 2 - 80)).toBeLessThanOrEqual(30)
    expect(run(y, { draws: 500, seed: 9 }).level).toBe(found.level)
  })

  test('a place without room is refused', () => {
    expect(() => run(base.y, { fromMs: 100, toMs: 110 })).toThrow(/a bump must fit between 100 and 110 ms/)
  })
})

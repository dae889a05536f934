import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  lateOnlyVerdict,
  type LateOnlyVerdict,
  verdictConditions,
  type VerdictGrounds,
} from '../../src/evidence/late-only-verdict.ts'
import { latestOnset } from '../../src/evidence/onset-scan.ts'
import { type LateOnlyFacts, lateOnlyWords, parseNumber } from '../../src/words/index.ts'

function facts(
  grounds: VerdictGrounds,
  more: Partial<LateOnlyFacts> & { noiseScale?: number; alphaScale?: number; others?: LateOnlyVerdict[] } = {},
): LateOnlyFacts {
  const conditions = verdictConditions(grounds)
  const verdict = lateOnlyVerdict(conditions)
  const { noiseScale = 1.1, alphaScale = 0, others = [verdict, verdict], ...rest } = more
  const { interval } = grounds
  const beta = (interval[0] + interval[1]) / 2
  const variants = others.map((other, i) => ({
    sigmaUv: i === 0 ? 50 : 10,
    lengthMs: i === 0 ? 15 : 30,
    beta,
    interval,
    verdict: other,
  }))
  const changed = others.some((other) => other !== verdict)
  return {
    robust: {
      verdict: changed ? 'cannot be told' : verdict,
      changed,
      variants,
      fit: {
        beta,
        interval: [...interval],
        noiseScale,
        alphaScale,
        lateShare: grounds.lateShare,
        verdict,
        conditions,
        grounds,
      },
    },
    t0Ms: 200,
    slackMs: 30,
    early: { fromMs: 80, toMs: 140 },
    sigmaUv: 10,
    lengthMs: 15,
    scan: null,
    ...rest,
  }
}

const can: VerdictGrounds = {
  interval: [-0.2, 0.82],
  largestUv: 1.6,
  meanUv: -1.19,
  noiseOfMeanUv: 0.2,
  lateShare: 0.93,
}

describe('lateOnlyWords', () => {
  test('it can, which does not prove that it did', () => {
    const words = lateOnlyWords(facts(can))
    expect(words.verdict).toBe('It can')
    expect(words.estimate).toBe(
      'Estimated early activity from 80 to 140 ms: +0.31 µV (95 % interval −0.20 to 0.82 µV, which includes zero), as the peak of a raised cosine in the unfiltered signal.',
    )
    expect(words.reason).toBe(
      'The interval includes zero, and activity that begins no earlier than 200 ms less 30 ms makes 93 % of the deflection’s mean (at least half was asked for). That it can does not prove that it did.',
    )
    expect(words.noise).toBe('The noise was found to be 1.1 times the stated noise in power (s).')
    expect(words.alpha).toBe('No alpha activity beyond the stated noise was found (a = 0 µV²/Hz).')
    expect(words.phaseLocked).toMatch(/about 10 Hz.*cannot be told from an early component/)
    expect(words.scan).toBe(null)
  })

  test('a noise scale outside ½ to 2 is remarked on', () => {
    expect(lateOnlyWords(facts(can, { noiseScale: 2.004 })).noise).toBe(
      'The noise was found to be 2.004 times the stated noise in power (s), more than twice: the stated noise, its trials or its chain may be wrong.',
    )
    expect(lateOnlyWords(facts(can, { noiseScale: 0.31 })).noise).toContain('less than half')
    expect(lateOnlyWords(facts(can, { noiseScale: 0.5 })).noise).not.toContain('wrong')
  })

  test('cannot be told names each condition that failed', () => {
    const wide = lateOnlyWords(facts({ ...can, interval: [-2, 2.5], lateShare: 0.496 })).reason
    expect(wide).toBe(
      'The interval includes zero, but it is 4.50 µV wide, no narrower than the deflection is large (1.60 µV) and late activity makes only 49.6 % of the deflection’s mean, less than half.',
    )
    expect(lateOnlyWords(facts({ ...can, meanUv: -0.1 })).reason).toContain('does not stand out from its noise')
  })

  test('a verdict that hangs on another assumption does not stand', () => {
    const words = lateOnlyWords(facts(can, { others: ['it can', 'not by late activity alone'] }))
    expect(words.verdict).toBe('Cannot be told')
    expect(words.reason).toMatch(/This does not stand/)
    expect(words.robust).toBe(
      'The verdict hangs on what is assumed of late activity, and so cannot be told: as assumed it is “it can”, with late activity 5 times as large (σ 50 µV) it is “it can” (+0.31 µV, 95 % interval −0.20 to 0.82 µV) and with late activity 2 times as smooth (ℓ 30 ms) it is “not by late activity alone” (+0.31 µV, 95 % interval −0.20 to 0.82 µV).',
    )
  })

  test('a waveform without noise is not reproached with it', () => {
    const noiseless = lateOnlyWords({ ...facts(can), noiseless: true })
    expect(noiseless.noise).toMatch(/without noise/)
    expect(noiseless.noise).not.toMatch(/may be wrong/)
    // the interval of a waveform that the fit cannot follow can be wider than a study's
    expect(noiseless.noise).not.toMatch(/narrow/)
    expect(noiseless.alpha).toBe('None of that looks like alpha activity (a = 0 µV²/Hz).')
    // a density of millions of µV²/Hz is no finding about a brain
    const taken = lateOnlyWords({ ...facts(can, { alphaScale: 7.9e6 }), noiseless: true })
    expect(taken.alpha).toBe('Some of that it takes for alpha activity (a).')
  })

  test('the strongest early component anywhere is held against what chance finds', () => {
    const strongest = { fromMs: 60, toMs: 140, amplitudeUv: -2.134, standardError: 0.5, z: -4.27 }
    const words = (level: number) =>
      lateOnlyWords({ ...facts(can), bumps: { strongest, level, draws: 2000, criticalZ: 2.9 } }).bumps
    expect(words(0.0005)).toBe(
      'Of early components of several widths and places, the strongest lies from 60 to 140 ms: −2.13 µV (|z| = 4.3). In 2000 simulated waveforms without early activity, 0.05 % had one at least as strong (5 % exceed |z| = 2.9), which chance alone rarely makes.',
    )
    expect(words(0.4)).toMatch(/40\.0 % had one at least as strong .* chance alone may have made it/)
    expect(lateOnlyWords(facts(can)).bumps).toBeNull()
  })

  const rowsOf = (verdicts: readonly LateOnlyVerdict[]) =>
    verdicts.map((verdict, i) => ({ t0Ms: 100 + 20 * i, beta: 0, interval: [-1, 1] as const, z: 0, verdict }))
  const scanned = (verdicts: readonly LateOnlyVerdict[]) => {
    const rows = rowsOf(verdicts)
    return lateOnlyWords(facts(can, { scan: { rows, ...latestOnset(rows) } })).scan
  }

  test('the latest onset that the data allow, found, before the scan or beyond it', () => {
    expect(scanned(['it can', 'cannot be told', 'not by late activity alone'])).toBe(
      'Of 3 assumed onsets from 100 to 140 ms, the latest that the data allow is 120 ms; at the next, 140 ms, late activity alone is ruled out.',
    )
    expect(scanned(['it can', 'not by late activity alone', 'it can', 'cannot be told'])).toBe(
      'Of 4 assumed onsets from 100 to 160 ms, the latest before the first that is ruled out is 100 ms; at the next, 120 ms, late activity alone is ruled out, at 2 later ones not.',
    )
    expect(scanned(['not by late activity alone', 'it can'])).toContain('already the earliest is ruled out')
    expect(scanned(['it can', 'it can'])).toContain('lies at 120 ms or later')
    expect(scanned(['it can'])).toBe('One assumed onset was tried, 100 ms: late activity alone is not ruled out there.')
  })

  test('whatever the fit gives, every sentence is whole and in keeping with the verdict', () => {
    const size = fc.oneof(fc.constantFrom(0, 1e-9, 1e12), fc.double({ min: 0, max: 50, noNaN: true }))
    const verdicts = fc.constantFrom<LateOnlyVerdict>('it can', 'not by late activity alone', 'cannot be told')
    const drawn = fc.record({
      middle: fc.double({ min: -20, max: 20, noNaN: true }),
      half: size,
      largestUv: size,
      meanUv: fc.double({ min: -20, max: 20, noNaN: true }),
      noiseOfMeanUv: size,
      lateShare: fc.double({ min: -3, max: 3, noNaN: true }),
      noiseScale: size,
      alphaScale: size,
      others: fc.option(fc.array(verdicts, { maxLength: 2 }), { nil: undefined }),
      slackMs: fc.constantFrom(0, 30),
      scan: fc.array(verdicts, { maxLength: 4 }),
    })
    fc.assert(
      fc.property(drawn, ({ middle, half, scan, slackMs, noiseScale, alphaScale, others, ...grounds }) => {
        const rows = rowsOf(scan)
        const all = facts(
          { ...grounds, interval: [middle - half, middle + half] },
          {
            slackMs,
            noiseScale,
            alphaScale,
            ...(others ? { others } : {}),
            ...(rows.length > 0 ? { scan: { rows, ...latestOnset(rows) } } : {}),
          },
        )
        const words = lateOnlyWords(all)
        for (const said of Object.values(words)) {
          if (said === null || said === words.verdict) continue
          expect(said).toMatch(/^[A-Z].*\.$/)
          expect(said).not.toMatch(/undefined|NaN|null|Infinity| {2}|\u2013|, but \./)
          for (const [text] of said.matchAll(/[+−]?\d+(?:\.\d+)?/g)) expect(parseNumber(text)).not.toBeNaN()
        }
        expect(words.verdict === 'It can').toBe(all.robust.verdict === 'it can')
        if (all.robust.fit.verdict === 'it can') expect(words.reason).toContain('does not prove that it did')
        else expect(words.reason).not.toContain('That it can')
        expect(words.noise.includes('may be wrong')).toBe(noiseScale > 2 || noiseScale < 0.5)
      }),
      { numRuns: 500 },
    )
  })
})

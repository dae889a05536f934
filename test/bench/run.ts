import { type ChildProcessWithoutNullStreams, spawn } from 'node:child_process'
import { cpus, loadavg } from 'node:os'
import { dirname, join } from 'node:path'
import { createInterface } from 'node:readline'
import { fileURLToPath } from 'node:url'
import { Worker } from 'node:worker_threads'
import { applyChain } from '../../src/filter/apply-chain.ts'
import { chainResponse, designChain } from '../../src/filter/index.ts'
import { pageStep, traceStep } from './page-steps.ts'
import {
  AVERAGES,
  BROAD_BAND,
  butterworth,
  CHANNELS,
  EPOCH,
  FILTERS,
  FINITE_SLIDER,
  LONG_FIR,
  noise,
  RATE,
  RECURSIVE_SLIDER,
  SAMPLES,
  type Slider,
  sliderStep,
  sweepByAdjoint,
  sweepByFiltering,
  sweepByMap,
} from './workloads.ts'

/**
 * Times the core's work in rounds, ours and SciPy's in turn, and prints medians, their ratio and the goal. Nothing fails when
 * a goal is missed: single runs move by a quarter.
 */
const ms = () => performance.now()
const wanted = process.argv.slice(2).map((id) => id.toUpperCase())
const selected = (id: string) => wanted.length === 0 || wanted.includes(id.toUpperCase())

function quantile(values: readonly number[], q: number): number {
  const sorted = [...values].sort((a, b) => a - b)
  return sorted[Math.min(sorted.length - 1, Math.floor(q * sorted.length))]!
}
const median = (values: readonly number[]) => quantile(values, 0.5)

function timed(work: () => unknown): number {
  const began = ms()
  work()
  return ms() - began
}

/** A Python process that does one workload for each line that it is sent. */
interface Scipy {
  time(name: string): Promise<number>
  stop(): void
}

async function startScipy(python: string): Promise<Scipy> {
  const script = join(dirname(fileURLToPath(import.meta.url)), 'scipy_side.py')
  // A warm heap: with the default allocator SciPy spends most of its time on page faults.
  const heap = { MALLOC_MMAP_MAX_: '0', MALLOC_TRIM_THRESHOLD_: '100000000000', MALLOC_TOP_PAD_: '1000000000' }
  const child: ChildProcessWithoutNullStreams = spawn(python, ['-B', '-W', 'ignore', script], {
    env: { ...process.env, ...heap },
  })
  child.stderr.pipe(process.stderr)
  const lines = createInterface({ input: child.stdout })[Symbol.asyncIterator]()
  const next = async () => {
    const { value, done } = await lines.next()
    if (done) throw new Error('the SciPy side of the bench ended early')
    return value as string
  }
  await next()
  return {
    time: async (name) => {
      child.stdin.write(`${name}\n`)
      return Number(await next())
    },
    stop: () => child.stdin.end(),
  }
}

/** Two workers that share a job between them. */
function startWorkers(file: string) {
  const workers = [new Worker(file), new Worker(file)]
  const ask = (job: (half: number) => object) =>
    Promise.all(
      workers.map(
        (worker, half) =>
          new Promise<void>((resolve, reject) => {
            worker.removeAllListeners()
            worker.once('message', () => resolve())
            worker.once('error', reject)
            worker.postMessage({ half, ...job(half) })
          }),
      ),
    )
  return { ask, stop: () => Promise.all(workers.map((worker) => worker.terminate())) }
}

const show = (value: number) => (value >= 100 ? value.toFixed(0) : value.toPrecision(2))

function row(
  id: string,
  work: string,
  ours: string,
  scipy: string,
  ratio: string,
  goal: string,
  met: boolean | null,
): void {
  const verdict = met === null ? '' : met ? 'met' : 'not met'
  const cells = [id.padEnd(5), work.padEnd(52), ours.padStart(9), scipy.padStart(9), ratio.padStart(7)]
  console.log(`${cells.join(' ')}  ${goal.padEnd(18)} ${verdict}`)
}

/** A row that compares speeds: SciPy's time over ours, against the least ratio that is the goal. */
function compare(id: string, work: string, ours: number[], scipy: number[], goal: number | null): void {
  const [us, them] = [median(ours), scipy.length > 0 ? median(scipy) : null]
  const ratio = them === null ? null : them / us
  const met = ratio === null || goal === null ? null : ratio >= goal
  row(
    id,
    work,
    show(us),
    them === null ? '' : show(them),
    ratio === null ? '' : ratio.toFixed(2),
    goal === null ? '' : `≥ ${goal}`,
    met,
  )
}

function makeChannels(): { channels: Float64Array[]; shared: SharedArrayBuffer[] } {
  const shared = Array.from({ length: CHANNELS }, () => new SharedArrayBuffer(8 * SAMPLES))
  const channels = shared.map((buffer, c) => noise(SAMPLES, c + 1, new Float64Array(buffer)))
  return { channels, shared }
}

async function benchSlider(
  id: string,
  work: string,
  slider: Slider,
  scipyName: string,
  limits: { median: number; p99: number | null },
  scipy: Scipy | null,
) {
  // The very first call in this process: code not yet compiled, tables not yet made.
  const first = timed(() => sliderStep(slider, 0.5))
  for (let i = 0; i < 60; i++) sliderStep(slider, (i * 0.077) % 1)
  const ours: number[] = []
  const theirs: number[] = []
  for (let round = 0; round < 15; round++) {
    for (let i = 0; i < 20; i++) ours.push(timed(() => sliderStep(slider, ((round * 20 + i) * 0.0137) % 1)))
    for (let i = 0; i < 3 && scipy; i++) theirs.push(await scipy.time(scipyName))
  }
  const them = theirs.length > 0 ? median(theirs) : null
  const us = median(ours)
  row(
    id,
    `${work}: median`,
    show(us),
    them === null ? '' : show(them),
    them === null ? '' : (them / us).toFixed(2),
    `≤ ${limits.median} ms`,
    us <= limits.median,
  )
  const slow = quantile(ours, 0.99)
  row(
    '',
    '  99th percentile',
    show(slow),
    '',
    '',
    limits.p99 === null ? '' : `≤ ${limits.p99} ms`,
    limits.p99 === null ? null : slow <= limits.p99,
  )
  row('', '  first call in a fresh process', show(first), '', '', '≤ 33 ms', first <= 33)
}

/** What the page does on its own thread, against the share of a frame that it may take (or, for epochs, what the trace may). */
function benchPage(id: string, work: string, step: (position: number) => number, goalMs: number): void {
  for (let i = 0; i < 60; i++) step((i * 0.077) % 1)
  const ours = Array.from({ length: 300 }, (_, i) => timed(() => step((i * 0.0137) % 1)))
  const us = median(ours)
  row(id, `${work}: median`, show(us), '', '', `≤ ${goalMs} ms`, us <= goalMs)
  row('', '  99th percentile', show(quantile(ours, 0.99)), '', '', '', null)
}

async function main() {
  const scipy = process.env.BENCH_PYTHON ? await startScipy(process.env.BENCH_PYTHON) : null
  const began = ms()
  const versions = `node ${process.versions.node}${scipy ? `, SciPy ${process.env.BENCH_SCIPY}` : ''}`
  console.log(`${cpus()[0]?.model.trim() ?? 'unknown processor'} × ${cpus().length}, ${versions}`)
  console.log('medians in ms; ratio: how many times as fast as SciPy')
  const load = loadavg()[0]!
  if (load > 0.5) console.log(`other work is running here (load ${load.toFixed(1)}): the figures are disturbed`)
  console.log()
  row('id', 'work', 'ours', 'SciPy', 'ratio', 'goal', null)

  // The sliders come first, so that their first calls meet a fresh process.
  if (selected('W4')) {
    await benchSlider(
      'W4',
      'slider step, recursive, 4 × 1500 samples',
      RECURSIVE_SLIDER,
      'w4',
      { median: 1, p99: 4 },
      scipy,
    )
  }
  if (selected('W4f')) {
    await benchSlider('W4f', 'slider step, 3301 taps', FINITE_SLIDER, 'w4f', { median: 5, p99: null }, scipy)
  }

  if (selected('page')) {
    benchPage('page', 'slider step of the whole page, first sight: evaluation', pageStep, 8)
    benchPage('', '  trace-back, continuous, 1500 samples', (at) => traceStep('continuous', at), 8)
    benchPage('', '  trace-back, epochs of 1500 samples', (at) => traceStep('epochs', at), 50)
  }

  if (selected('W3')) {
    const hz = Float64Array.from({ length: 2048 }, (_, i) => 0.01 * (RATE / 2 / 0.01) ** (i / 2047))
    for (const [work, specs, name, goal] of [
      ['response at 2048 frequencies, 8 sections', [butterworth('band', 8, [1, 30], 'forward')], 'w3_sections', 4],
      ['response at 2048 frequencies, 1651 taps', LONG_FIR, 'w3_taps', 5],
    ] as const) {
      const chain = designChain(specs, RATE)
      const ours: number[] = []
      const theirs: number[] = []
      for (let round = 0; round < 40; round++) {
        for (let i = 0; i < 5; i++) ours.push(timed(() => chainResponse(chain, hz)))
        if (scipy) theirs.push(await scipy.time(name))
      }
      compare('W3', work, ours, theirs, goal)
    }
  }

  const workers = process.env.BENCH_WORKER ? startWorkers(process.env.BENCH_WORKER) : null

  if (selected('W1') || selected('W2')) {
    const { channels, shared } = makeChannels()
    const output = new Float64Array(SAMPLES)
    const filterAll = (specs: typeof BROAD_BAND) => {
      const chain = designChain(specs, RATE)
      for (const x of channels) applyChain(chain, x, 'epochs', output)
    }
    if (selected('W1')) {
      const [one, two, oneCall, twoCalls]: [number[], number[], number[], number[]] = [[], [], [], []]
      const half = (h: number) => shared.slice(h * (CHANNELS / 2), (h + 1) * (CHANNELS / 2))
      await workers?.ask((h) => ({ id: 'share', shared: half(h) }))
      for (let round = 0; round < 6; round++) {
        const a = timed(() => filterAll(BROAD_BAND))
        const start = ms()
        await workers?.ask(() => ({ id: 'W1' }))
        const b = ms() - start
        const c = scipy ? await scipy.time('w1_one_call') : null
        const d = scipy ? await scipy.time('w1_two_calls') : null
        if (round === 0) continue // compiles, and faults memory in
        one.push(a)
        two.push(b)
        if (c !== null) oneCall.push(c)
        if (d !== null) twoCalls.push(d)
      }
      compare('W1', '0.1–30 Hz, 64 × 300 000; SciPy in one call', one, oneCall, 1.2)
      compare('', '  SciPy stage by stage', one, twoCalls, null)
      compare('', '  two workers; SciPy in one call', two, oneCall, 1.8)
    }
    if (selected('W2')) {
      const [ours, theirs]: [number[], number[]] = [[], []]
      for (let round = 0; round < 5; round++) {
        const a = timed(() => filterAll(LONG_FIR))
        const b = scipy ? await scipy.time('w2') : null
        if (round === 0) continue
        ours.push(a)
        if (b !== null) theirs.push(b)
      }
      compare('W2', '1651 taps, 64 × 300 000', ours, theirs, 0.33)
    }
  }

  if (selected('W5') || selected('W5p')) {
    const averages = Array.from({ length: AVERAGES }, (_, a) => noise(EPOCH, a + 1))
    if (selected('W5')) {
      const [ours, brute, adjoint]: [number[], number[], number[]] = [[], [], []]
      let scores = sweepByAdjoint(averages)
      for (let round = 0; round < 5; round++) {
        ours.push(timed(() => (scores = sweepByAdjoint(averages))))
        if (scipy) adjoint.push(await scipy.time('w5_adjoint'))
        if (scipy && round < 2) brute.push(await scipy.time('w5_brute_force'))
      }
      const reference = sweepByFiltering(averages, 'mean', 0, FILTERS)
      let [most, worst] = [0, 0]
      for (const value of reference) most = Math.max(most, Math.abs(value))
      for (let i = 0; i < reference.length; i++) worst = Math.max(worst, Math.abs(reference[i]! - scores[i]!) / most)
      const us = median(ours)
      const them = adjoint.length > 0 ? median(adjoint) : null
      const ratio = them === null ? '' : (them / us).toFixed(2)
      row(
        'W5',
        '320 filters × 200 averages, mean, by the adjoint',
        show(us),
        them === null ? '' : show(them),
        ratio,
        '≤ 400 ms',
        us <= 400,
      )
      compare('', '  SciPy by brute force', ours, brute, null)
      row('', '  largest difference from brute force', worst.toExponential(1), '', '', '≤ 1e-10', worst <= 1e-10)
      let mapped = sweepByMap(averages)
      const maps = Array.from({ length: 5 }, () => timed(() => (mapped = sweepByMap(averages))))
      let apart = 0
      for (let i = 0; i < reference.length; i++) apart = Math.max(apart, Math.abs(reference[i]! - mapped[i]!) / most)
      const whole = median(maps)
      row('', '  as trade-off maps, their noise included', show(whole), '', '', '≤ 400 ms', whole <= 400)
      row('', '  largest difference from brute force', apart.toExponential(1), '', '', '≤ 1e-10', apart <= 1e-10)
    }
    if (selected('W5p')) {
      const [one, two, theirs]: [number[], number[], number[]] = [[], [], []]
      for (let round = 0; round < 4; round++) {
        const a = timed(() => sweepByFiltering(averages, 'peak-amplitude', 0, FILTERS))
        const start = ms()
        await workers?.ask(() => ({ id: 'W5p' }))
        const b = ms() - start
        const c = scipy ? await scipy.time('w5p') : null
        if (round === 0) continue
        one.push(a)
        two.push(b)
        if (c !== null) theirs.push(c)
      }
      compare('W5p', '320 filters × 200 averages, peak, by filtering', one, theirs, 1.5)
      compare('', '  two workers', two, theirs, 3)
    }
  }

  await workers?.stop()
  scipy?.stop()
  console.log(`\n${((ms() - began) / 1000).toFixed(0)} s`)
}

await main()

/** What the workspace becomes when a table is opened: the user's data, and everything else as sensible as it can be guessed. */
import type { Baseline } from '../erp/baseline.ts'
import type { TimeWindow } from '../erp/time-axis.ts'
import type { Table } from '../files/index.ts'
import { waveformOf } from '../files/index.ts'
import { type RecordedSource, START_TRADE_OFF, type Workspace } from './workspace.ts'

/** Half the width of the score window that is laid around the largest deflection, and of the wider window of the readout's rows. */
const SCORE_HALF_MS = 25
const PEAK_HALF_MS = 80

/**
 * The workspace on a table just read. From a built waveform the chain starts empty, since the data have their own history; from
 * another recording the chain stays, so that one chain is easily tried on several files.
 */
export function workspaceOnTable(workspace: Workspace, source: RecordedSource, table: Table): Workspace {
  const channel =
    workspace.shown.channel !== null && table.channels.includes(workspace.shown.channel)
      ? workspace.shown.channel
      : table.channels[0]
  const condition = table.conditions[0]
  const { values } = waveformOf(table, condition, channel)
  const { timesMs } = table
  const from = Math.max(
    0,
    timesMs.findIndex((ms) => ms >= 0),
  )
  let peak = from
  for (let i = from; i < values.length; i++) if (Math.abs(values[i]) > Math.abs(values[peak])) peak = i
  const around = (halfMs: number) => windowAround(timesMs, peak, halfMs)
  const polarity = values[peak] < 0 ? ('negative' as const) : ('positive' as const)
  const earlier = workspace.source.kind === 'recorded'
  return {
    ...workspace,
    title: source.fileName,
    remark: '',
    source,
    shown: { conditions: [condition], difference: null, chosen: condition, channel },
    chain: earlier ? workspace.chain : [],
    // of the stages in the data, of which only late-only fits ask; what is applied here always runs on the epoch
    extent: earlier ? workspace.extent : 'continuous',
    baseline: baselineOn(timesMs),
    trials: table.trialsAveraged ?? (earlier ? workspace.trials : 40),
    score: { kind: 'mean', ...around(SCORE_HALF_MS), polarity },
    measure: { mean: around(SCORE_HALF_MS), peak: around(PEAK_HALF_MS), polarity },
    limits: {
      score: { value: 0.5, unit: 'µV' },
      'mean-amplitude': { value: 0.5, unit: 'µV' },
      'peak-amplitude': { value: 0.5, unit: 'µV' },
      'peak-latency': { value: 10, unit: 'ms' },
      'area-latency': { value: 10, unit: 'ms' },
      'onset-latency': { value: 10, unit: 'ms' },
      'false-deflection': { value: 0.5, unit: 'µV' },
    },
    onsetMs: null,
    // what was varied in a built waveform’s chain, and its ranges, mean nothing here
    tradeOff: earlier ? workspace.tradeOff : START_TRADE_OFF,
  }
}

/** A window in whole milliseconds, as a person would state it, inside the epoch; where samples are too far apart for that, the samples around it. */
function windowAround(timesMs: Float64Array, at: number, halfMs: number): TimeWindow {
  const last = timesMs.length - 1
  const whole = {
    fromMs: Math.ceil(Math.max(timesMs[at] - halfMs, timesMs[0])) + 0, // no −0
    toMs: Math.floor(Math.min(timesMs[at] + halfMs, timesMs[last])),
  }
  if (samplesIn(timesMs, whole) > 1) return whole
  return { fromMs: timesMs[Math.max(0, at - 2)], toMs: timesMs[Math.min(last, at + 2)] }
}

/** The time before the event, where there is enough of it. */
function baselineOn(timesMs: Float64Array): Baseline {
  const whole = { fromMs: Math.ceil(timesMs[0]), toMs: Math.min(0, Math.floor(timesMs[timesMs.length - 1])) }
  return timesMs[0] <= -20 && samplesIn(timesMs, whole) > 0 ? whole : 'none'
}

function samplesIn(timesMs: Float64Array, { fromMs, toMs }: TimeWindow): number {
  return timesMs.filter((ms) => ms >= fromMs && ms <= toMs).length
}

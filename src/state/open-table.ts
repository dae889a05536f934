/** What the workspace becomes when a table is opened: the user's data, and everything else as sensible as it can be guessed. */
import type { Table } from '../files/index.ts'
import { waveformOf } from '../files/index.ts'
import type { RecordedSource, Workspace } from './workspace.ts'

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
  const first = timesMs[0]
  const last = timesMs[timesMs.length - 1]
  let peak = 0
  const from = Math.max(0, timesMs.findIndex((ms) => ms >= 0))
  for (let i = from; i < values.length; i++) if (Math.abs(values[i]) > Math.abs(values[peak])) peak = i
  const stepMs = 1000 / table.samplingRateHz
  const around = (halfMs: number) => {
    const whole = Math.max(2 * stepMs, Math.round(halfMs / stepMs) * stepMs)
    const snapped = (ms: number) => Number(ms.toFixed(3))
    return {
      fromMs: snapped(Math.max(first, timesMs[peak] - whole)),
      toMs: snapped(Math.min(last, timesMs[peak] + whole)),
    }
  }
  const polarity = values[peak] < 0 ? ('negative' as const) : ('positive' as const)
  const earlier = workspace.source.kind === 'recorded'
  return {
    ...workspace,
    title: source.fileName,
    remark: '',
    source,
    shown: { conditions: [condition], difference: null, chosen: condition, channel },
    chain: earlier ? workspace.chain : [],
    extent: 'epochs',
    baseline: first <= -20 ? { fromMs: Number(first.toFixed(3)), toMs: 0 } : 'none',
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
  }
}

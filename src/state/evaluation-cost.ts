/** Whether an evaluation would hold up the page: then it goes to the worker and the last figure stays until the new one is there. */
import type { StageSpec } from '../filter/stage.ts'
import type { RecordedData } from './recorded-data.ts'
import type { Workspace } from './workspace.ts'

/** Roughly the samples that one evaluation runs through; about 5 ns each. */
const HEAVY_SAMPLES = 1_500_000

/** What a tap costs beside a sample that is run through: designing, responses and sums take each tap many times, a minimum phase more. */
const TAP_COST = { compensated: 60, causal: 60, 'minimum-phase': 500 } as const

/** Samples over which a stage's kernel matters: its taps by their cost, or some twenty time constants of its slowest pole. */
function kernelSamples(spec: StageSpec, samplingRateHz: number): number {
  switch (spec.design) {
    case 'windowed-sinc':
      return (TAP_COST[spec.delay] * 3.3 * samplingRateHz) / spec.transitionHz
    case 'moving-average':
      return (spec.durationMs / 1000) * samplingRateHz
    case 'amplifier':
      return (3.5 * samplingRateHz) / spec.cutoffHz
    case 'notch':
      return (7 * samplingRateHz) / spec.bandwidthHz
    case 'butterworth':
      return (1.5 * spec.order * samplingRateHz) / Math.min(...spec.cutoffsHz)
  }
}

export function isHeavy(workspace: Workspace, data: RecordedData | null): boolean {
  const { source } = workspace
  const samplingRateHz = source.kind === 'built' ? source.samplingRateHz : (data?.samplingRateHz ?? 0)
  const epochSamples =
    source.kind === 'built'
      ? ((source.epoch.toMs - source.epoch.fromMs) / 1000) * samplingRateHz
      : (data?.timesMs.length ?? 0)
  const costOf = (chain: readonly StageSpec[]) =>
    chain
      .filter((spec) => spec.enabled !== false)
      .reduce((sum, spec) => sum + 3 * kernelSamples(spec, samplingRateHz) + 12 * epochSamples, 20 * epochSamples)
  // What was computed of a pinned chain is mostly remembered: it counts only where it is heavy by itself.
  return [workspace.chain, ...workspace.pins.map((pin) => pin.chain)].some((chain) => costOf(chain) > HEAVY_SAMPLES)
}

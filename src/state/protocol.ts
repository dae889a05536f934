import { unnamedCondition } from '../files/index.ts'
import { componentsWords, type Protocol } from '../words/index.ts'
import { DIFFERENCE, type Workspace } from './workspace.ts'

export { unnamedCondition }

/** What the protocol line states of a workspace. */
export function protocolOf(workspace: Workspace, samplingRateHz: number): Protocol {
  const { source } = workspace
  return {
    source: source.kind,
    waveform: waveformWords(workspace),
    samplingRateHz,
    events: source.kind === 'built' ? source.events : null,
    chain: workspace.chain,
    extent: source.kind === 'recorded' ? 'epochs' : workspace.extent,
    baseline: workspace.baseline,
    trials: workspace.trials,
    score: workspace.score,
  }
}

function waveformWords({ source, shown }: Workspace): string {
  const { chosen, difference, channel } = shown
  const minus = chosen === DIFFERENCE && difference ? `${difference.first} minus ${difference.second}` : null
  if (source.kind === 'recorded') {
    const what = [channel, minus ?? (chosen === unnamedCondition ? null : chosen)].filter(Boolean).join(', ')
    return `${what || 'the first channel'} of ${source.fileName}`
  }
  if (minus) return `the difference ${minus}`
  const condition = source.conditions.find((entry) => entry.name === chosen)
  return condition ? componentsWords(condition.components) : chosen
}

/** How far the maps are, with the means to stop them and to go on. */
import { exact } from '../../../words/index.ts'
import { WordButton } from '../../fields.tsx'
import type { DrawnMaps } from './use-maps.ts'

/** What is drawn is not yet all that is asked for. */
export const isRunning = ({ maps }: DrawnMaps) =>
  maps.some(({ state, stale }) => stale || !state || state.status === 'running')

export function MapProgress({ drawn }: { drawn: DrawnMaps }) {
  const { maps } = drawn
  const failed = maps.find(({ state }) => state?.status === 'failed')
  if (failed)
    return (
      <p className="small over" role="alert">
        The map could not be computed: {failed.state?.reason} <WordButton onPress={drawn.goOn}>try again</WordButton>
      </p>
    )
  const draws = Math.min(...maps.map(({ state }) => state?.draws ?? 0))
  const simulated = maps[0].request.simulated && draws > 0
  const each = simulated ? `, ${exact(draws)} simulated averages each` : ''
  const done = maps.reduce((sum, { state }) => sum + (state?.done ?? 0), 0)
  const total = maps.reduce((sum, { figures }) => sum + figures.cells.length, 0)
  const { waveforms } = maps[0].request.question
  const cancelled = maps.some(({ state }) => state?.status === 'cancelled')
  const running = isRunning(drawn)
  return (
    <p className="small quiet map-progress">
      {cancelled && !maps.some(({ state }) => state?.status === 'running') ? (
        <>
          Stopped at {done} of {total} filters{each}. <WordButton onPress={drawn.goOn}>go on</WordButton>
        </>
      ) : running ? (
        <>
          {simulated ? 'Refining the noise: ' : 'Computing: '}
          {done} of {total} filters{each}. <WordButton onPress={drawn.cancel}>cancel</WordButton>
        </>
      ) : (
        <>
          {total} filters{maps.length > 1 ? ` in ${maps.length} maps` : ''}
          {each}
          {waveforms.length > 1 ? `, over ${waveforms.length} waveforms` : ''}.
        </>
      )}
    </p>
  )
}

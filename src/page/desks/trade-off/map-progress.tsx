/** How far the maps are, with the means to stop them and to go on. */
import { exact } from '../../../words/index.ts'
import { WordButton } from '../../fields.tsx'
import type { DrawnMaps } from './use-maps.ts'

export const isRunning = ({ maps }: DrawnMaps) => maps.some(({ asked }) => !asked || asked.status === 'running')

export function MapProgress({ drawn }: { drawn: DrawnMaps }) {
  const { maps } = drawn
  const failed = maps.find(({ asked }) => asked?.status === 'failed')
  if (failed)
    return (
      <p className="small over" role="alert">
        The map could not be computed: {failed.asked?.reason} <WordButton onPress={drawn.goOn}>try again</WordButton>
      </p>
    )
  const draws = Math.min(...maps.map(({ asked }) => asked?.draws ?? 0))
  const simulated = maps[0].request.simulated && draws > 0
  const each = simulated ? `, ${exact(draws)} simulated averages each` : ''
  const done = maps.reduce((sum, { asked }) => sum + (asked?.done ?? 0), 0)
  const total = maps.reduce((sum, { figures }) => sum + figures.cells.length, 0)
  const { waveforms } = maps[0].request.question
  const cancelled = maps.some(({ asked }) => asked?.status === 'cancelled')
  const running = isRunning(drawn)
  return (
    <p className="small quiet map-progress">
      {cancelled && !running ? (
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

/** What a map leaves out, and what it must not be used for. */
import { useStore } from 'zustand'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import { say } from '../../../state/store.ts'
import { DIFFERENCE, type Workspace } from '../../../state/workspace.ts'
import { WordButton } from '../../fields.tsx'

export function MapNotes({ workspace }: { workspace: Workspace }) {
  const { source, shown, tradeOff } = workspace
  const data = useStore(dataStore, (state) => recordedData(source, state.files))
  if (source.kind === 'recorded' && tradeOff.waveform === 'chosen' && data?.conditions.length === 1)
    return (
      <p className="small map-note">
        A filter that is chosen on the data under test inflates false positives. Choose on other data, or on a built
        waveform (the first phrase of the page).
      </p>
    )
  if (source.kind === 'recorded' && tradeOff.waveform === 'chosen')
    return (
      <p className="small map-note">
        {shown.chosen === DIFFERENCE
          ? 'This difference wave is the effect under test: a filter that is chosen on it inflates false positives. '
          : 'A filter that is chosen on the data under test inflates false positives. '}
        Choose on{' '}
        <WordButton onPress={() => say((w) => ({ ...w, tradeOff: { ...w.tradeOff, waveform: 'average' } }))}>
          the average over all conditions
        </WordButton>{' '}
        instead, or on a built waveform (the first phrase of the page).
      </p>
    )
  if (source.kind === 'built' && source.events !== 'alone')
    return (
      <p className="small map-note">The map takes the event alone: what overlaps from its neighbours is not counted.</p>
    )
  return null
}

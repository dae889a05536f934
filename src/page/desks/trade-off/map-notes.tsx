/** What a map leaves out, what counts in all its filters, and what it must not be used for. */
import { type ReactNode, useMemo } from 'react'
import { useStore } from 'zustand'
import { EXTRAPOLATED_MARK } from '../../../state/chosen-noise.ts'
import type { Evaluation } from '../../../state/evaluation.ts'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import { say } from '../../../state/store.ts'
import { biasOfRest } from '../../../state/trade-off.ts'
import { DIFFERENCE, type Workspace } from '../../../state/workspace.ts'
import { fixed } from '../../../words/index.ts'
import { WordButton } from '../../fields.tsx'
import { changeText, type MapUnit } from './map-words.ts'

interface MapNotesProps {
  workspace: Workspace
  /** Of the workspace, or the last one that there was. */
  evaluation: Evaluation
  unit: MapUnit
}

export function MapNotes({ workspace, evaluation, unit }: MapNotesProps) {
  const { source, tradeOff } = workspace
  const data = useStore(dataStore, (state) => recordedData(source, state.files))
  const rest = useMemo(() => restOf(workspace, data), [workspace, data])
  const { extrapolated } = evaluation.noiseOf
  const notes: [string, ReactNode][] = []
  if (source.kind === 'recorded') {
    if (tradeOff.waveform === 'chosen')
      notes.push(['choose', <Chosen key="choose" {...{ workspace }} several={data?.conditions.length !== 1} />])
    notes.push([
      'noisy',
      'A recorded average still holds noise, and what a filter removes of it counts as bias here: where few trials were averaged, a built waveform tells the bias of the effect alone.',
    ])
  }
  if (rest !== null)
    notes.push([
      'rest',
      `Bias and noise are those of the whole chain: without the filter that is varied its other stages have a bias of ${changeText(rest)} ${unit}.`,
    ])
  if (extrapolated && extrapolated.before > EXTRAPOLATED_MARK)
    notes.push([
      'extrapolated',
      `The noise rests on extrapolation: ${fixed(100 * extrapolated.before, 0)} % of the unfiltered score’s variance lies below what trials of this length can show, and so the factors, which are against the unfiltered score, are a guess.`,
    ])
  if (evaluation.locked)
    notes.push(['locked', 'Interference locked to the event is in the bias: what a filter leaves of it counts.'])
  if (source.kind === 'built' && source.events !== 'alone')
    notes.push(['alone', 'The map takes the event alone: what overlaps from its neighbours is not counted.'])
  return notes.map(([key, note]) => (
    <p key={key} className="small map-note">
      {note}
    </p>
  ))
}

/** Null too where the chain cannot run: the map itself says why. */
function restOf(workspace: Workspace, data: Parameters<typeof biasOfRest>[1]): number | null {
  try {
    return biasOfRest(workspace, data)
  } catch (error) {
    if (error instanceof RangeError) return null
    throw error
  }
}

function Chosen({ workspace, several }: { workspace: Workspace; several: boolean }) {
  const difference = workspace.shown.chosen === DIFFERENCE
  return (
    <>
      {difference
        ? 'This difference wave is the effect under test: a filter that is chosen on it inflates false positives. '
        : 'A filter that is chosen on the data under test inflates false positives. '}
      {several ? (
        <>
          Choose on{' '}
          <WordButton onPress={() => say((w) => ({ ...w, tradeOff: { ...w.tradeOff, waveform: 'average' } }))}>
            the average over all conditions
          </WordButton>{' '}
          instead, or on a built waveform (the first phrase of the page).
        </>
      ) : (
        'Choose on other data, or on a built waveform (the first phrase of the page).'
      )}
    </>
  )
}

/** How the opened file was read: every guess with its reason, each to be confirmed or changed. */
import { useState } from 'react'
import type { Guess, Table, TableRefusal } from '../../files/index.ts'
import { workspaceOnTable } from '../../state/open-table.ts'
import { rereadTable } from '../../state/recorded-data.ts'
import { say } from '../../state/store.ts'
import { look } from '../../state/view.ts'
import type { Reading, RecordedSource } from '../../state/workspace.ts'
import { brief } from '../../words/index.ts'
import { Actions, Choice, WordButton } from '../fields.tsx'
import { closeEditor, Editor } from './editor.tsx'

const GUESS_WORDS: Partial<Record<Guess['what'], string>> = {
  delimiter: 'columns are separated by',
  decimal: 'decimal sign',
  layout: 'layout',
  columnsAre: 'columns are',
  timeColumn: 'time column',
  valueColumn: 'value column',
  conditionColumn: 'condition column',
  channelColumn: 'channel column',
  participantColumn: 'participant column',
  trialColumn: 'trial column',
  ignoreColumns: 'left aside',
  timeUnit: 'time in',
  amplitudeUnit: 'amplitude in',
  samplingRateHz: 'sampling rate',
  firstMs: 'first sample at',
  participant: 'participant',
  trial: 'trial',
}

interface ReadingEditorProps {
  source: RecordedSource
  table: Table
  onOpenFile: () => void
}

export function ReadingEditor({ source, table, onOpenFile }: ReadingEditorProps) {
  const [refusal, setRefusal] = useState<TableRefusal | null>(null)
  const reread = async (change: Partial<Reading>) => {
    const reading: Reading = { ...source.reading, ...change }
    for (const key of Object.keys(reading) as (keyof Reading)[]) if (reading[key] === undefined) delete reading[key]
    try {
      const next = await rereadTable(source, reading)
      if (!next) return
      if (!next.ok) return setRefusal(next)
      setRefusal(null)
      const reread: RecordedSource = { ...source, reading }
      say((w) => {
        const sameAxis =
          next.timesMs.length === table.timesMs.length &&
          next.timesMs[0] === table.timesMs[0] &&
          next.conditions.join() === table.conditions.join() &&
          next.channels.join() === table.channels.join()
        return sameAxis ? { ...w, source: reread } : workspaceOnTable(w, reread, next)
      })
    } catch (error) {
      if (!(error instanceof DOMException && error.name === 'AbortError')) throw error
    }
  }
  const value = (what: Guess['what']) => table.guesses.find((guess) => guess.what === what)?.value
  const units = ['V', 'mV', 'µV', 'nV'] as const
  const times = ['s', 'ms'] as const
  const timeUnit = times.find((unit) => unit === value('timeUnit'))
  const amplitudeUnit = units.find((unit) => unit === value('amplitudeUnit'))
  return (
    <Editor title={source.fileName} subtitle="how it was read">
      <p>
        {table.channels.length} {table.channels.length === 1 ? 'channel' : 'channels'}, {table.conditions.length}{' '}
        {table.conditions.length === 1 ? 'condition' : 'conditions'}, {table.timesMs.length} samples at{' '}
        {brief(table.samplingRateHz, 6)} Hz, {brief(table.timesMs[0], 5)} to{' '}
        {brief(table.timesMs[table.timesMs.length - 1], 5)} ms
        {table.trialsAveraged ? `, mean of ${table.trialsAveraged} trials` : ''}.
      </p>
      {timeUnit ? (
        <div className="guess-row">
          <span className="quiet">time in</span>
          <Choice
            label="time unit"
            value={timeUnit}
            options={times.map((unit) => ({ value: unit, text: unit }))}
            onChange={(unit) => void reread({ timeUnit: unit })}
          />
        </div>
      ) : null}
      {amplitudeUnit ? (
        <div className="guess-row">
          <span className="quiet">amplitude in</span>
          <Choice
            label="amplitude unit"
            value={amplitudeUnit}
            options={units.map((unit) => ({ value: unit, text: unit }))}
            onChange={(unit) => void reread({ amplitudeUnit: unit })}
          />
        </div>
      ) : null}
      {table.layout === 'wide' && (value('columnsAre') === 'channels' || value('columnsAre') === 'conditions') ? (
        <div className="guess-row">
          <span className="quiet">columns are</span>
          <Choice
            label="columns are"
            value={value('columnsAre') as 'channels' | 'conditions'}
            options={[
              { value: 'channels', text: 'channels' },
              { value: 'conditions', text: 'conditions' },
            ]}
            onChange={(columnsAre) => void reread({ columnsAre })}
          />
        </div>
      ) : null}
      {(table.participants?.length ?? 0) > 1 ? (
        <PickOne
          label="participant"
          value={source.reading.participant}
          options={table.participants ?? []}
          onChange={(participant) => void reread({ participant })}
        />
      ) : null}
      {(table.trials?.length ?? 0) > 1 || source.reading.trial !== undefined ? (
        <PickOne
          label="trial"
          value={source.reading.trial}
          options={table.trials ?? []}
          onChange={(trial) => void reread({ trial })}
        />
      ) : null}
      <dl className="guesses">
        {table.guesses.map((guess) => (
          <div key={guess.what}>
            <dt>
              {GUESS_WORDS[guess.what] ?? guess.what} {guess.value}
            </dt>
            <dd className="quiet">
              {guess.from === 'inferred' ? 'inferred: ' : ''}
              {guess.why}
            </dd>
          </div>
        ))}
      </dl>
      {table.warnings.map((warning) => (
        <p key={warning}>{warning}</p>
      ))}
      {refusal ? (
        <p className="field-error" role="alert">
          Read that way it is no table: {refusal.reason}
          {refusal.line ? ` (line ${refusal.line}${refusal.column ? `, column ${refusal.column}` : ''})` : ''}.{' '}
          {refusal.todo}
        </p>
      ) : null}
      <Actions>
        <WordButton onPress={closeEditor}>it is right</WordButton>
        <WordButton onPress={() => look({ open: 'waveform' })}>condition and channel</WordButton>
        <WordButton onPress={() => look({ open: 'source' })}>scenarios</WordButton>
        <WordButton onPress={onOpenFile}>open another file</WordButton>
      </Actions>
    </Editor>
  )
}

function PickOne(props: {
  label: string
  value: string | undefined
  options: readonly string[]
  onChange: (value: string | undefined) => void
}) {
  return (
    <div className="guess-row">
      <label className="quiet">
        {props.label}{' '}
        <select
          value={props.value ?? ''}
          onChange={(event) => props.onChange(event.target.value === '' ? undefined : event.target.value)}
        >
          <option value="">mean of all</option>
          {props.options.map((name) => (
            <option key={name}>{name}</option>
          ))}
        </select>
      </label>
    </div>
  )
}

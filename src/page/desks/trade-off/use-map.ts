/** The map of the desk: asked for as soon as the question stands still, drawn while it is computed. */
import { useEffect, useMemo, useRef, useState } from 'react'
import { useStore } from 'zustand'
import type { TradeOffLimits } from '../../../evidence/trade-off-answer.ts'
import { computeMaps } from '../../../state/map-bench.ts'
import { type MapFigures, mapFigures } from '../../../state/map-figures.ts'
import { mapStore, type MapState } from '../../../state/map-run.ts'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import { mapLimits, mapRequest, type MapRequest } from '../../../state/trade-off.ts'
import type { Workspace } from '../../../state/workspace.ts'

/** A question that is being dragged is not asked before it rests. */
const REST_MS = 120

export interface DrawnMap {
  /** The request whose cells are drawn: the last one while the new one has none. */
  request: MapRequest
  state: MapState | undefined
  figures: MapFigures
  limits: TradeOffLimits
  /** What is drawn is not yet the map that is asked for. */
  stale: boolean
  cancel: () => void
  goOn: () => void
}

export function useMap(
  workspace: Workspace,
  scoreBefore: number | null,
): { ok: true; map: DrawnMap } | { ok: false; reason: string } {
  const data = useStore(dataStore, (state) => recordedData(workspace.source, state.files))
  const outcome = useMemo(() => mapRequest(workspace, data), [workspace, data])
  const request = outcome.ok ? outcome.request : null
  const key = request?.key
  const maps = useStore(mapStore, (store) => store.maps)
  const [attempt, setAttempt] = useState(0)
  const control = useRef<AbortController | null>(null)
  // The request is said in full by its key; trials and limits change it without another map.
  // biome-ignore lint/correctness/useExhaustiveDependencies: see above
  useEffect(() => {
    if (!request) return
    const own = new AbortController()
    control.current = own
    const timer = setTimeout(() => void computeMaps([request], own.signal), REST_MS)
    return () => {
      clearTimeout(timer)
      own.abort()
    }
  }, [key, attempt])

  const present = key === undefined ? undefined : maps[key]
  const last = useRef<MapRequest | null>(null)
  if (request && (present?.before || !last.current)) last.current = request
  // N and the limits are those of the moment, whichever map is drawn
  const drawn = last.current && request && present?.before ? request : last.current
  const state = drawn ? maps[drawn.key] : undefined
  const limits = useMemo(() => mapLimits(workspace, scoreBefore), [workspace, scoreBefore])
  const said = JSON.stringify(limits)
  const { over } = workspace.tradeOff
  // biome-ignore lint/correctness/useExhaustiveDependencies: the limits as text, since they are made anew with every workspace
  const figures = useMemo(() => drawn && mapFigures(drawn, state, over, limits), [drawn, state, over, said])
  if (!outcome.ok) return outcome
  if (!drawn || !figures) return { ok: false, reason: 'Working …' }
  return {
    ok: true,
    map: {
      ...{ request: drawn, state, figures, limits },
      stale: drawn.key !== key,
      cancel: () => control.current?.abort(),
      goOn: () => setAttempt((count) => count + 1),
    },
  }
}

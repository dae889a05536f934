/** The maps of the desk: asked for as soon as the question stands still, drawn while they are computed. */
import { useDeferredValue, useEffect, useMemo, useRef, useState } from 'react'
import { useStore } from 'zustand'
import type { TradeOffLimits } from '../../../evidence/trade-off-answer.ts'
import { computeMaps } from '../../../state/map-bench.ts'
import { type MapFigures, mapFigures } from '../../../state/map-figures.ts'
import { mapStore, type MapState } from '../../../state/map-run.ts'
import { dataStore, recordedData } from '../../../state/recorded-data.ts'
import {
  aboutKind,
  comparedKinds,
  type FilterKind,
  mapLimits,
  mapRequest,
  type MapRequest,
} from '../../../state/trade-off.ts'
import type { Workspace } from '../../../state/workspace.ts'

/** A question that is being dragged is not asked before it rests. */
const REST_MS = 120

export interface DrawnMap {
  kind: FilterKind
  /** Names the kind in keys and ids. */
  id: string
  /** The request whose cells are drawn: the last one while the new one has none. */
  request: MapRequest
  state: MapState | undefined
  /** How far the map is that is asked for, drawn or not yet; undefined before it is begun. */
  asked: Pick<MapState, 'status' | 'reason' | 'done' | 'draws'> | undefined
  figures: MapFigures
  limits: TradeOffLimits
  /** What is drawn is not yet the map that is asked for. */
  stale: boolean
}

export interface DrawnMaps {
  /** The desk's own kind first; never empty. */
  maps: readonly DrawnMap[]
  cancel: () => void
  goOn: () => void
}

export function useMaps(
  workspace: Workspace,
  scoreBefore: number | null,
): { ok: true; drawn: DrawnMaps } | { ok: false; reason: string } {
  const data = useStore(dataStore, (state) => recordedData(workspace.source, state.files))
  const asked = useMemo(
    () =>
      comparedKinds(workspace.tradeOff).map((kind) => ({
        kind,
        outcome: mapRequest(aboutKind(workspace, kind), data),
      })),
    [workspace, data],
  )
  const requests = asked.flatMap(({ outcome }) => (outcome.ok ? [outcome.request] : []))
  const keys = requests.map(({ key }) => key).join('\n')
  // a map that grows gives way to whatever else the page has to draw
  const store = useDeferredValue(useStore(mapStore, ({ maps }) => maps))
  const [attempt, setAttempt] = useState(0)
  const control = useRef<AbortController | null>(null)
  // The requests are said in full by their keys; trials and limits change them without another map.
  // biome-ignore lint/correctness/useExhaustiveDependencies: see above
  useEffect(() => {
    if (requests.length === 0) return
    const own = new AbortController()
    control.current = own
    const timer = setTimeout(() => void computeMaps(requests, own.signal), REST_MS)
    return () => {
      clearTimeout(timer)
      own.abort()
    }
  }, [keys, attempt])

  const limits = useMemo(() => mapLimits(workspace, scoreBefore), [workspace, scoreBefore])
  const kept = useRef(new Map<string, Kept>())
  const refused = asked.find(({ outcome }) => !outcome.ok)
  if (refused && !refused.outcome.ok) return refused.outcome
  const maps = asked.flatMap(({ kind, outcome }): DrawnMap[] => {
    if (!outcome.ok) return []
    const { request } = outcome
    const id = `${kind.design} ${kind.direction}`
    const last = kept.current.get(id)
    // N and the limits are those of the moment, whichever map is drawn
    const drawn = store[request.key]?.before || !last ? request : last.request
    const now = keep(last, drawn, store[drawn.key], workspace.tradeOff.over, limits)
    kept.current.set(id, now)
    const { state, figures } = now
    return [
      {
        ...{ kind, id, request: drawn, state, figures, limits: now.limits },
        asked: store[request.key],
        stale: drawn.key !== request.key,
      },
    ]
  })
  return {
    ok: true,
    drawn: { maps, cancel: () => control.current?.abort(), goOn: () => setAttempt((count) => count + 1) },
  }
}

interface Kept {
  request: MapRequest
  state: MapState | undefined
  over: Workspace['tradeOff']['over']
  limits: TradeOffLimits
  figures: MapFigures
}

/** The same figures and limits for the same map: one that grows does not draw the others anew. */
function keep(
  last: Kept | undefined,
  request: MapRequest,
  state: MapState | undefined,
  over: Kept['over'],
  asked: TradeOffLimits,
): Kept {
  const limits = last && JSON.stringify(last.limits) === JSON.stringify(asked) ? last.limits : asked
  const same =
    last?.state === state &&
    last?.over === over &&
    last.limits === limits &&
    last.request.key === request.key &&
    last.request.trials === request.trials
  return { request, state, over, limits, figures: same ? last.figures : mapFigures(request, state, over, limits) }
}

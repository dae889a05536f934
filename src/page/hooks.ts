import { useSyncExternalStore } from 'react'
import { useStore } from 'zustand'
import { workspaceStore } from '../state/store.ts'
import { type View, viewStore } from '../state/view.ts'
import type { Workspace } from '../state/workspace.ts'

export function useWorkspace(): Workspace {
  return useStore(workspaceStore, (state) => state.workspace)
}

export function useView<T>(selector: (view: View) => T): T {
  return useStore(viewStore, selector)
}

export function useHistory(): { canUndo: boolean; canRedo: boolean } {
  const { temporal } = workspaceStore
  const canUndo = useSyncExternalStore(temporal.subscribe, () => temporal.getState().pastStates.length > 0)
  const canRedo = useSyncExternalStore(temporal.subscribe, () => temporal.getState().futureStates.length > 0)
  return { canUndo, canRedo }
}

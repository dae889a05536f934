/** The figures that can go on a sheet: those that stand on the page now, and those that were put there from a desk which may be closed since. */
import { createContext } from 'react'
import { createStore } from 'zustand/vanilla'
import { drawnFigure, type SheetFigure } from '../plot/index.ts'
import { inLightTheme } from './light-theme.ts'

/** A figure that stands on the page; svg and caption are read when it is drawn. */
export interface LiveFigure {
  /** Name of its file, one on the page. */
  id: string
  title: string
  svg: () => SVGSVGElement | null
  caption: () => string
}

/** A figure as it was when it was put on the sheet, with the caption of that moment. */
export interface KeptFigure extends SheetFigure {
  id: string
}

/** More than these make no sheet. */
export const MOST_KEPT = 12

interface Figures {
  live: readonly LiveFigure[]
  kept: readonly KeptFigure[]
}

export const figureStore = createStore<Figures>(() => ({ live: [], kept: [] }))

/** Whether a figure belongs to a desk, which may be closed when the sheet is made. */
export const OnDesk = createContext(false)

/** @returns takes the figure off the list again. */
export function register(figure: LiveFigure): () => void {
  figureStore.setState(({ live }) => ({ live: [...live, figure] }))
  return () => figureStore.setState(({ live }) => ({ live: live.filter((entry) => entry !== figure) }))
}

/** Figures in the order in which they stand on the page. */
export function inPageOrder(live: readonly LiveFigure[]): LiveFigure[] {
  return live
    .filter((figure) => figure.svg() !== null)
    .sort((a, b) => {
      const [first, second] = [a.svg(), b.svg()] as [SVGSVGElement, SVGSVGElement]
      return first.compareDocumentPosition(second) & Node.DOCUMENT_POSITION_FOLLOWING ? -1 : 1
    })
}

/**
 * A figure as it goes on the sheet, or null where nothing is drawn. Sheets are paper: they are drawn in the colours of the light theme.
 */
export function onPaper({ svg, caption, title }: LiveFigure): SheetFigure | null {
  const drawing = svg()
  if (!drawing) return null
  const drawn = inLightTheme(() => drawnFigure(drawing))
  // the figure's own name says more than the head above it: "Kernel: step response"
  const name = drawing.querySelector('title')?.textContent || title
  return { title: name, caption: caption(), drawn }
}

let count = 0

/** @returns whether the figure is now on the sheet. */
export function keep(figure: LiveFigure): boolean {
  const drawn = onPaper(figure)
  if (!drawn || figureStore.getState().kept.length >= MOST_KEPT) return false
  count += 1
  const id = `kept-${count}`
  figureStore.setState(({ kept }) => ({ kept: [...kept, { ...drawn, id }] }))
  return true
}

export function dropKept(id: string): void {
  figureStore.setState(({ kept }) => ({ kept: kept.filter((figure) => figure.id !== id) }))
}

import type { PublishedSource } from '../../../words/index.ts'

/** "Pernet et al. 2020 (seen)": the name up to its year, and how surely it is quoted; the rest stands under the table. */
export function shortSource({ words, mark }: PublishedSource): string {
  if (words === mark) return words
  const name = /^.*?\b(?:19|20)\d\d\b/.exec(words)?.[0] ?? words
  return `${name} (${markWords(mark)})`
}

/** "from memory, high": a mark as it stands between brackets. */
export const markWords = (mark: string) => mark.replace(/ \((.*)\)$/, ', $1')

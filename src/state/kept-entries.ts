/** Entries by key, the newest last and no more than so many: an answer that was seen before stands there at once, and none pile up. */
export function withEntry<T extends { readonly key: string }>(
  entries: Readonly<Record<string, T>>,
  entry: T,
  most: number,
): Readonly<Record<string, T>> {
  const others = Object.entries(entries).filter(([key]) => key !== entry.key)
  return Object.fromEntries([...others.slice(Math.max(0, others.length + 1 - most)), [entry.key, entry]])
}

/** A question as text: two equal ones are one question. Samples are written out. */
export const questionKey = (question: unknown): string =>
  JSON.stringify(question, (_, value) => (ArrayBuffer.isView(value) ? Array.from(value as never) : value))

/** A step that is a whole number of tenths of a millisecond prints exactly. */
const PRINTED_MS = 0.1

/**
 * The window between two samples as a person would write it. Where samples do not fall on tenths of a millisecond (256 Hz: every
 * 3.90625 ms) its limits are rounded outward to tenths: printed and typed again, they still hold the same samples.
 */
export function statedWindow(
  { from, to }: { from: number; to: number },
  stepMs: number,
): { fromMs: number; toMs: number } {
  const tenths = stepMs / PRINTED_MS
  if (Math.abs(tenths - Math.round(tenths)) < 1e-9) return { fromMs: tidy(from), toMs: tidy(to) }
  if (from === to) return { fromMs: from, toMs: to }
  return {
    fromMs: tidy(Math.floor(from / PRINTED_MS) * PRINTED_MS),
    toMs: tidy(Math.ceil(to / PRINTED_MS) * PRINTED_MS),
  }
}

/** Without the dust of binary fractions: 0.1 + 0.2 prints as 0.3. */
const tidy = (ms: number) => Number(ms.toFixed(6))

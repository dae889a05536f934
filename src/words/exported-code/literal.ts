/** Numbers as source text that every language reads back to the same double. */

/** All 17 significant digits, or fewer where they say the same: 0.5, 1.0, 0.99822442502500001, 2.5e-7. */
export function literal(value: number): string {
  if (!Number.isFinite(value)) throw new RangeError(`a coefficient must be a finite number, was ${value}`)
  const short = String(value)
  const text = short.length <= 8 ? short : value.toPrecision(17)
  return /^-?\d+$/.test(text) ? `${text}.0` : text.replace('e+', 'e')
}

/** Numbers in lines of a few, each line indented, a separator between two numbers. */
export function literals(values: Iterable<number>, indent: string, perLine: number, whole = false): string {
  const texts = Array.from(values, (value) => (whole ? String(value) : literal(value)))
  const lines: string[] = []
  for (let i = 0; i < texts.length; i += perLine) lines.push(indent + texts.slice(i, i + perLine).join(', '))
  return lines.join(',\n')
}

/** Rows of six coefficients. */
export function sectionRows(sections: Float64Array): number[][] {
  const rows: number[][] = []
  for (let at = 0; at < sections.length; at += 6) rows.push(Array.from(sections.subarray(at, at + 6)))
  return rows
}

/** Lines as a comment. */
export function commented(lines: readonly string[], sign: string): string {
  return lines.map((line) => (line === '' ? sign : `${sign} ${line}`)).join('\n')
}

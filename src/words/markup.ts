/** Prose as plain text, Markdown or LaTeX; nothing in it that a user typed can act as markup. */

export type Markup = 'text' | 'markdown' | 'latex'

const LATEX: Readonly<Record<string, string>> = {
  '\\': '\\textbackslash{}',
  '{': '\\{',
  '}': '\\}',
  $: '\\$',
  '&': '\\&',
  '#': '\\#',
  '%': '\\%',
  _: '\\_',
  '~': '\\textasciitilde{}',
  '^': '\\textasciicircum{}',
  '<': '\\textless{}',
  '>': '\\textgreater{}',
  '|': '\\textbar{}',
  '"': "''",
  '`': '\\textasciigrave{}',
  '√': '$\\sqrt{\\ }$',
  '√2': '$\\sqrt{2}$',
  '…': '\\ldots{}',
  '\u00a0': '~',
  '\u2212': '$-$',
  '\u00b5': '$\\mu$',
  '\u03bc': '$\\mu$',
  β: '$\\beta$',
  '±': '$\\pm$',
  '×': '$\\times$',
  '·': '$\\cdot$',
  '°': '$^\\circ$',
  '≤': '$\\leq$',
  '≥': '$\\geq$',
  '–': '--',
  '—': '---',
  '‘': '`',
  '’': "'",
  '“': '``',
  '”': "''",
}

/** A number stays on one line with its unit. */
const NUMBER_AND_UNIT = /(\d) (Hz|ms|s|dB|µV|samples?|taps?|trials?|%)(?![A-Za-z])/g

/** Characters without a shape that turn the direction of what follows: a user's words must not reorder the others. */
const REORDERING = /[\u202a-\u202e\u2066-\u2069]/g

/** The same words in another markup. Line breaks and control characters become spaces. */
export function inMarkup(prose: string, markup: Markup): string {
  const plain = prose
    .replace(REORDERING, '')
    .replace(/[\s\u0000-\u001f\u007f-\u009f]+/g, ' ')
    .trim()
  if (markup === 'text') return plain
  // any ASCII punctuation may stand behind a backslash in Markdown
  if (markup === 'markdown') return plain.replace(/[\\`*_{}[\]<>#|~$&^@]|-(?=-)/g, '\\$&')
  return plain.replace(NUMBER_AND_UNIT, '$1\u00a0$2').replace(/√2(?!\d)|./gu, (piece, at: number, all: string) =>
    // two hyphens would become a dash
    piece === '-' && all[at + 1] === '-' ? '-{}' : (LATEX[piece] ?? piece),
  )
}

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
const NUMBER_AND_UNIT = /(\d) (Hz|ms|s|dB|µV|samples?|taps?|trials?|\\%)(?![A-Za-z])/g

/** The same words in another markup. Line breaks and control characters become spaces. */
export function inMarkup(prose: string, markup: Markup): string {
  const plain = prose.replace(/[\s\u0000-\u001f\u007f]+/g, ' ').trim()
  if (markup === 'text') return plain
  // any ASCII punctuation may stand behind a backslash in Markdown
  if (markup === 'markdown') return plain.replace(/[\\`*_{}[\]<>#|~$&]/g, '\\$&')
  return plain
    .replace(NUMBER_AND_UNIT, '$1\u00a0$2')
    .replace(/√2/g, '\u221a')
    .replace(/./gu, (character) => {
      if (character === '\u00a0') return '~'
      if (character === '\u221a') return '$\\sqrt{2}$'
      return LATEX[character] ?? character
    })
}

import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { inMarkup } from '../../src/words/markup.ts'
import { methodsParagraph, STATEMENT_FIELDS, type WriteUpFacts } from '../../src/words/index.ts'

/** What a LaTeX engine prints for a piece; anything else that could act as a command is a fault. */
const PRINTED: Readonly<Record<string, string>> = {
  '\\textbackslash{}': '\\',
  '\\textasciitilde{}': '~',
  '\\textasciicircum{}': '^',
  '\\textasciigrave{}': '`',
  '\\textless{}': '<',
  '\\textgreater{}': '>',
  '\\textbar{}': '|',
  '\\ldots{}': '…',
  '\\{': '{',
  '\\}': '}',
  '\\$': '$',
  '\\&': '&',
  '\\#': '#',
  '\\%': '%',
  '\\_': '_',
  '~': ' ',
  '-{}': '-',
  '$-$': '−',
  '$\\mu$': 'µ',
  '$\\beta$': 'β',
  '$\\pm$': '±',
  '$\\times$': '×',
  '$\\sqrt{2}$': '√2',
  '$\\sqrt{\\ }$': '√',
}

function printedByLatex(source: string): string {
  let rest = source
  let printed = ''
  const pieces = Object.keys(PRINTED)
  while (rest !== '') {
    const piece = pieces.find((candidate) => rest.startsWith(candidate))
    const next = piece ?? String.fromCodePoint(rest.codePointAt(0) as number)
    if (piece === undefined && '\\{}$&#%_~^<>|'.includes(next)) throw new Error(`${next} acts as markup in ${source}`)
    printed += piece === undefined ? next : PRINTED[piece]
    rest = rest.slice(next.length)
  }
  return printed
}

/** What Markdown prints: a backslash before ASCII punctuation is left out (CommonMark 0.31, section 2.4). */
function printedByMarkdown(source: string): string {
  const unescaped = source.replace(/\\[!-/:-@[-`{-~]/g, 'x')
  expect(unescaped, source).not.toMatch(/[\\`*_{}[\]<>#|~$&^@]|--/)
  return source.replace(/\\([!-/:-@[-`{-~])/g, '$1')
}

/** Everything that acts as markup somewhere, among words. */
const hostile = fc
  .array(
    fc.constantFrom(
      ...'\\ { } $ & # % _ ~ ^ < > | ` * [ ] ( ) ! @ - -- --- √ √2 √3 √25 − µ ± × β … 1 Hz ms 50 % a b . : ;'.split(
        ' ',
      ),
      '\\end{document}',
      '\\input{x}',
      '<!-- x -->',
      '[x](javascript:x)',
      '$$x$$',
      '\n\n# x',
      '\t',
      ' ',
      '☃',
      '𝄞',
    ),
    { minLength: 1, maxLength: 24 },
  )
  .map((pieces) => pieces.join(''))

const spaced = (words: string) => words.replace(/\s+/g, ' ').trim()

describe('inMarkup', () => {
  test('as LaTeX prints the same words, whatever a user typed', () => {
    fc.assert(
      fc.property(hostile, (words) => {
        expect(printedByLatex(inMarkup(words, 'latex'))).toBe(spaced(words))
      }),
      {
        numRuns: 500,
      },
    )
  })

  test('as Markdown prints the same words, whatever a user typed', () => {
    fc.assert(
      fc.property(hostile, (words) => {
        expect(printedByMarkdown(inMarkup(words, 'markdown'))).toBe(spaced(words))
      }),
      { numRuns: 500 },
    )
  })

  test('as plain text adds nothing', () => {
    fc.assert(
      fc.property(hostile, (words) => {
        expect(inMarkup(words, 'text')).toBe(spaced(words))
      }),
      { numRuns: 200 },
    )
  })

  test('is one line without control characters or turns of direction, in every markup', () => {
    const words = 'a\u0000b\r\nc\u2028d\u0085e \u202egnp.\u202c f\u2066g\u2069'
    for (const markup of ['text', 'markdown', 'latex'] as const)
      expect(inMarkup(words, markup)).toBe('a b c d e gnp. fg')
  })

  test('keeps a number on one line with its unit in LaTeX, and a word that only begins like one not', () => {
    expect(inMarkup('250 Hz, 9 samples, 1 sample, 50 %, −3 dB, 4 hats, 4 msec', 'latex')).toBe(
      '250~Hz, 9~samples, 1~sample, 50~\\%, $-$3~dB, 4 hats, 4 msec',
    )
  })

  test('sets quotation marks, dashes and degrees as LaTeX does', () => {
    expect(inMarkup('“nose” – the participant’s, 5 µV, 10 ° ≤ x', 'latex')).toBe(
      "``nose'' -- the participant's, 5~$\\mu$V, 10 $^\\circ$ $\\leq$ x",
    )
  })
})

describe('the methods paragraph in a markup', () => {
  test('is the plain paragraph, with nothing of what was typed acting as markup', () => {
    const facts: WriteUpFacts = {
      source: 'recorded',
      waveform: 'average.csv',
      samplingRateHz: 250,
      chain: [
        {
          design: 'windowed-sinc',
          pass: 'band',
          cutoffsHz: [1, 30],
          meaning: 'half-power',
          transitionHz: 1.5,
          window: { name: 'kaiser', attenuationDb: 60 },
          delay: 'compensated',
        },
      ],
      extent: 'epochs',
      baseline: { fromMs: -200, toMs: 0 },
      trials: 40,
      score: { kind: 'onset-latency', fromMs: 300, toMs: 600, polarity: 'positive', fraction: 0.5 },
    }
    const fields = STATEMENT_FIELDS.map(({ field }) => field)
    fc.assert(
      fc.property(hostile, hostile, fc.constantFrom(...fields), (name, said, field) => {
        const typed = { ...facts, waveform: name, statements: { [field]: said } }
        const plain = methodsParagraph(typed)
        expect(plain).toContain(spaced(said))
        expect(printedByLatex(methodsParagraph(typed, 'latex').replaceAll("'", '’'))).toBe(plain)
        expect(printedByMarkdown(methodsParagraph(typed, 'markdown'))).toBe(plain)
      }),
      { numRuns: 200 },
    )
    expect(methodsParagraph(facts)).not.toMatch(/[\\$~*_]/)
  })
})

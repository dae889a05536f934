import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import { defaultNoise } from '../../src/erp/noise.ts'
import {
  type Dossier,
  type DossierSetting,
  dossierHtml,
  dossierMarkdown,
  type WriteUpFacts,
} from '../../src/words/index.ts'
import { inlineSvg } from '../../src/words/inline-svg.ts'
import { noiseWords } from '../../src/words/noise-words.ts'
import { answered, contexts, curves, names } from './random-claims.ts'
import { writeUps } from './random-write-ups.ts'

/** What an escaped page may hold of tags; those of the figure are the page's own. */
const VOID = new Set(['meta', 'br', 'hr', 'img', 'link', 'input'])
const OWN = new Set(
  (
    'html head meta title style body header main footer section h1 h2 h3 p table caption thead tbody tr th td dl div dt dd ' +
    'a figure figcaption svg g path text rect defs clippath pattern line tspan desc'
  ).split(' '),
)

/** Checks that every tag is one of the page's and is closed in its turn; returns the text outside of tags and style. */
function wellFormed(html: string): string {
  const body = html.replace(/^<!doctype html>\n/, '').replace(/<style>[\s\S]*?<\/style>/, '')
  const open: string[] = []
  const text = body.replace(/<(\/?)([a-zA-Z][\w-]*)((?:\s+[\w:-]+="[^"<]*")*)\s*(\/?)>/g, (_, end, name, __, empty) => {
    const tag = name.toLowerCase()
    expect(OWN.has(tag), tag).toBe(true)
    if (end) expect(open.pop()).toBe(tag)
    else if (!empty && !VOID.has(tag)) open.push(tag)
    return ' '
  })
  expect(open).toEqual([])
  // nothing is left that could begin a tag or an entity of its own
  expect(text).not.toMatch(/[<>]/)
  expect(text).not.toMatch(/&(?!(?:amp|lt|gt|quot|#39);)/)
  return text.replaceAll('\u00a0', ' ')
}

const facts: WriteUpFacts = {
  source: 'built',
  waveform: 'a late positivity',
  samplingRateHz: 250,
  events: 'alone',
  chain: [
    { design: 'butterworth', pass: 'high', order: 2, cutoffsHz: [1], meaning: 'half-amplitude', direction: 'both' },
  ],
  extent: 'continuous',
  baseline: { fromMs: -200, toMs: 0 },
  trials: 40,
  score: { kind: 'mean', fromMs: 80, toMs: 140, polarity: 'positive' },
  epoch: { fromMs: -200, toMs: 800, samples: 251 },
  softwareVersion: '9.8.7',
}
const setting: DossierSetting = {
  chainName: null,
  facts,
  setting: {
    chosen: { kind: 'condition', name: 'rare' },
    conditions: [{ name: 'rare' }],
    measure: { mean: { fromMs: 80, toMs: 140 }, peak: { fromMs: 250, toMs: 600 }, polarity: 'positive' },
    noise: defaultNoise(),
    noisePassed: 'nothing',
    trials: 40,
    taken: 'as it stands',
    filteredBefore: 'as stated',
    unseenThreshold: 0.05,
  },
  file: null,
  noiseFrom: 'as stated by the user',
  scoreUnit: 'µV',
}
const context = { filter: 'the filter', trials: 40, taken: 'as it stands' } as const
const svg =
  '<?xml version="1.0" encoding="UTF-8"?>\n<svg xmlns="http://www.w3.org/2000/svg" width="10" height="10" role="img"><title>curve</title>' +
  '<style>@font-face{src:url(data:font/woff2;base64,AA)}</style><defs><clipPath id="c"><rect width="5" height="5"/></clipPath></defs>' +
  '<path clip-path="url(#c)" d="M0 0L5 5"/></svg>\n'
const dossier: Dossier = {
  title: 'Review of <Someone & al.>',
  claims: [
    {
      form: { form: 'deflection', window: { fromMs: 80, toMs: 140 }, amount: 0.5, unit: 'µV' },
      madeIn: 'Reviewer 2, comment *4*',
      answer: {
        verdict: 'holds',
        number: -1.19,
        unit: 'µV',
        interval: null,
        grounds: { kind: 'number' },
        values: [{ name: 'at', value: 112, unit: 'ms' }],
      },
      context,
      curve: {
        varied: { stage: 0, what: 'cutoff', cutoff: 0 },
        unit: 'Hz',
        present: 1,
        points: [
          { at: 0.1, number: -0.1, verdict: 'does not hold' },
          { at: 1, number: -1.19, verdict: 'holds' },
        ],
        flips: [{ at: 0.31, below: 'does not hold', above: 'holds' }],
      },
      figureSvg: svg,
      setting: 0,
    },
  ],
  settings: [setting],
  softwareVersion: '9.8.7',
}

describe('dossier', () => {
  test('the page tells the claim, where it was made, verdict, number, reason, what would change it, and the figure', () => {
    const html = dossierHtml(dossier)
    const text = wellFormed(html)
    expect(html).toContain('<html lang="en">')
    expect(html).toContain('<title>Review of &lt;Someone &amp; al.&gt;</title>')
    expect(text).toContain('The filter makes a deflection of at least 0.5 µV between 80 and 140 ms')
    expect(text).toContain('Reviewer 2, comment *4*')
    expect(text).toContain(
      'The deflection that the filter makes there is −1.19 µV, at 112 ms, more than the 0.5 µV claimed.',
    )
    expect(text).toContain('Below a cutoff of 0.31 Hz it would not hold (looked at down to 0.1 Hz).')
    expect(html).toContain('<clipPath id="claim-1-c">')
    expect(html).toContain('clip-path="url(#claim-1-c)"')
  })

  test('a built waveform is told with all that it was built from, a recorded one is not', () => {
    const component = {
      shape: 'gaussian',
      name: 'late *positivity*',
      amplitudeUv: 7.9,
      latencyMs: 400,
      widthMs: 213,
    } as const
    const having = (source?: DossierSetting['setting']['conditions'][number]['source']): Dossier => ({
      ...dossier,
      settings: [{ ...setting, setting: { ...setting.setting, conditions: [{ name: 'rare', source }] } }],
    })
    expect(dossierMarkdown(having({ kind: 'built', components: [component] }))).toContain(
      '**Components:** of “rare”: late \\*positivity\\* (Gaussian, 7.9 µV at 400 ms, 213 ms wide at half maximum)',
    )
    expect(dossierMarkdown(having({ kind: 'recorded', values: new Float64Array(3) }))).not.toContain('**Components:**')
  })

  test('figures beside the first have ids and names of their own, and what is no figure is refused', () => {
    const [claim] = dossier.claims
    const moreFigures = [
      { title: 'The best account & what is left', svg },
      { title: 'Other onsets', svg },
    ]
    const html = dossierHtml({ ...dossier, claims: [{ ...claim, moreFigures }] })
    const text = wellFormed(html)
    expect(text).toContain('Figure 1a. The best account &amp; what is left')
    expect(text).toContain('Figure 1b. Other onsets')
    const ids = [...html.matchAll(/ id="([^"]*)"/g)].map(([, id]) => id)
    expect(new Set(ids).size).toBe(ids.length)
    const hostile = [{ title: 'x', svg: '<svg xmlns="http://www.w3.org/2000/svg"><script>1</script></svg>' }]
    expect(() => dossierHtml({ ...dossier, claims: [{ ...claim, moreFigures: hostile }] })).toThrow(RangeError)
  })

  test('every assumption is listed, with version and caution', () => {
    for (const text of [wellFormed(dossierHtml(dossier)), dossierMarkdown(dossier)]) {
      for (const part of [
        'Butterworth high-pass',
        '−200 to 0 ms',
        'built from components; no recording',
        'a power law of 7 µV²/Hz at 1 Hz',
        '40 per condition',
        'as it stands',
        'under 5 % of its largest absolute value',
        '95 % intervals',
        'after all its passes',
        'more than 5 % of the absolute weight',
        'Sidelobe 9.8.7',
        'For research planning, not for diagnosis.',
        'the local laboratory’s standards',
      ])
        expect(text).toContain(part)
    }
  })

  test('the page stands alone: no script, nothing from outside, headings in order', () => {
    const html = dossierHtml(dossier)
    expect(html).not.toMatch(/<script|<link|@import|@font-face|url\((?!#)|\ssrc=|href="(?!#)|\son\w+=/i)
    const levels = [...html.matchAll(/<h([1-6])/g)].map(([, level]) => Number(level))
    expect(levels[0]).toBe(1)
    expect(levels.filter((level) => level === 1).length).toBe(1)
    levels.slice(1).forEach((level, i) => expect(level - levels[i]).toBeLessThanOrEqual(1))
    for (const [, id] of html.matchAll(/href="#([^"]*)"/g)) expect(html.split(` id="${id}"`).length).toBe(2)
    const ids = [...html.matchAll(/ id="([^"]*)"/g)].map(([, id]) => id)
    expect(new Set(ids).size).toBe(ids.length)
  })

  test('every text colour has a contrast of at least 4.5 on its paper', () => {
    const luminance = (hex: string) => {
      const [r, g, b] = [1, 3, 5].map((i) => {
        const c = Number.parseInt(hex.slice(i, i + 2), 16) / 255
        return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4
      })
      return 0.2126 * r + 0.7152 * g + 0.0722 * b
    }
    const css = dossierHtml(dossier).match(/<style>([\s\S]*?)<\/style>/)?.[1] ?? ''
    const colours = [...css.matchAll(/[{;]\s*color: (#[0-9a-f]{6})/g)].map(([, colour]) => colour)
    expect(colours.length).toBeGreaterThan(4)
    const paper = luminance('#fffdf8')
    for (const colour of colours) expect((paper + 0.05) / (luminance(colour) + 0.05)).toBeGreaterThan(4.5)
  })

  test('Markdown escapes what a user typed and tells the changes in place of the figure', () => {
    const md = dossierMarkdown(dossier)
    expect(md).toContain('# Review of \\<Someone \\& al.\\>\n')
    expect(md).toContain('**Made in:** Reviewer 2, comment \\*4\\*')
    expect(md).toContain('**What would change it:** Below a cutoff of 0.31 Hz')
    expect(md).not.toContain('<svg')
  })

  test('a dossier without claims, a title or a chain that can be designed still says so', () => {
    const empty = { ...dossier, title: ' ', claims: [] }
    expect(wellFormed(dossierHtml(empty))).toContain('This dossier holds no claim.')
    expect(dossierMarkdown(empty)).toMatch(/^# Claims about a filter\n/)
    const chain = [{ ...facts.chain[0], cutoffsHz: [300] }] as WriteUpFacts['chain']
    expect(dossierMarkdown({ ...dossier, settings: [{ ...setting, facts: { ...facts, chain } }] })).toContain(
      'The chain cannot be designed. ',
    )
    expect(() => dossierHtml({ ...dossier, settings: [] })).toThrow(/setting must lie/)
  })

  test('whatever is claimed and answered, the page is well-formed and nothing that a user typed is markup', () => {
    const claims = fc.array(
      fc.record({
        both: answered,
        context: contexts,
        madeIn: names,
        curve: fc.option(curves),
        figureSvg: fc.constantFrom(null, svg),
      }),
      { maxLength: 3 },
    )
    fc.assert(
      fc.property(claims, names, writeUps, names, (drawn, title, anyFacts, file) => {
        const any: Dossier = {
          ...dossier,
          title,
          claims: drawn.map(({ both, ...rest }) => ({ ...both, ...rest, setting: 0 })),
          settings: [
            {
              ...setting,
              facts: anyFacts,
              file,
              chainName: title,
              setting: { ...setting.setting, chosen: { kind: 'difference', first: title, second: file } },
            },
          ],
        }
        const text = wellFormed(dossierHtml(any))
        const md = dossierMarkdown(any)
        for (const words of [text, md]) expect(words).not.toMatch(/undefined|NaN|Infinity|\bnull\b/)
        for (const [verdict, said] of [
          ['holds', 'Holds'],
          ['does not hold', 'Does not hold'],
          ['cannot be told', 'Cannot be told'],
        ])
          expect(md.split(`**Verdict:** ${said}\n`).length - 1).toBe(
            any.claims.filter(({ answer }) => answer.verdict === verdict).length,
          )
        expect(md).not.toMatch(/(?<!\\)<|\n(?!- \*\*|#|\||\n).*(?<!\\)\]\(/)
        // each claim has its row in the table, of three cells
        for (const row of md.split('\n').filter((line) => /^\| \d/.test(line)))
          expect(row.split(/(?<!\\)\|/).length).toBe(5)
      }),
      { numRuns: 60 },
    )
  })
})

describe('inlineSvg', () => {
  test('prefixes ids and what refers to them', () => {
    const out = inlineSvg('<svg><g id="a"/><use href="#a"/><text aria-labelledby="a b">x</text></svg>', 'p-')
    expect(out).toBe('<svg><g id="p-a"/><use href="#p-a"/><text aria-labelledby="p-a p-b">x</text></svg>')
  })

  test('refuses scripts, handlers, outside references and what is no svg', () => {
    for (const bad of [
      '<p>x</p>',
      '<svg><script>1</script></svg>',
      '<svg><a href="https://x.y">x</a></svg>',
      "<svg><image href='data:image/png,x'/></svg>",
      '<svg onload="x()"></svg>',
      '<svg><path fill="url(https://x.y#a)"/></svg>',
      '<svg><foreignObject/></svg>',
      '<svg><![CDATA[x]]></svg>',
    ])
      expect(() => inlineSvg(bad, 'p-')).toThrow(RangeError)
  })
})

describe('noiseWords', () => {
  test('a model has all its numbers, a table its range', () => {
    expect(noiseWords({ ...defaultNoise(), lines: [{ hz: 50, amplitudeUv: 2, locked: false }] })).toBe(
      'a power law of 7 µV²/Hz at 1 Hz with the exponent 1.3, a slow drift of 1 µV²/Hz at 1 Hz with the exponent 2, a white floor of 0.02 µV²/Hz, ' +
        'an alpha peak of 6 µV²/Hz at 10 Hz (standard deviation 1.5 Hz) and a line of 2 µV at 50 Hz, of random phase; below 0.02 Hz power law and drift are constant',
    )
    expect(noiseWords({ kind: 'table', hz: Float64Array.of(1, 40), uv2PerHz: Float64Array.of(2, 1) })).toBe(
      'a measured density at 2 frequencies from 1 to 40 Hz, kept constant outside them',
    )
  })
})

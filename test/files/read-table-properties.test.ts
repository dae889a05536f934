import fc from 'fast-check'
import { describe, expect, test } from 'vitest'
import {
  readTable,
  type Table,
  type TableOptions,
  type TableRefusal,
  trialsOf,
  waveformOf,
} from '../../src/files/index.ts'

const electrodes = ['Fp1', 'Fz', 'Cz', 'Pz', 'Oz', 'PO7', 'T8', 'FC3']
const usual = [100, 128, 160, 200, 250, 256, 500, 512, 1000, 1024, 2048]

/** What is in a table, and how it is printed. */
const contents = fc.record({
  rate: fc.constantFrom(...usual),
  firstSample: fc.integer({ min: -80, max: 40 }),
  samples: fc.integer({ min: 16, max: 60 }),
  channels: fc.uniqueArray(fc.constantFrom(...electrodes), { minLength: 1, maxLength: 5 }),
  conditions: fc.constantFrom(['rare', 'frequent'], ['old word', 'new; word', 'no, word'], ['Größe "x"']),
  trials: fc.integer({ min: 0, max: 3 }),
  seed: fc.integer({ min: 1, max: 1e6 }),
  sizeUv: fc.constantFrom(5, 50, 2000),
})
const print = fc.record({
  delimiter: fc.constantFrom(',', ';', '\t'),
  decimalComma: fc.boolean(),
  newline: fc.constantFrom('\n', '\r\n', '\r'),
  mark: fc.constantFrom('', '\ufeff'),
  quoteAll: fc.boolean(),
  comments: fc.boolean(),
  emptyEnd: fc.integer({ min: 0, max: 3 }),
  timeUnit: fc.constantFrom('s', 'ms'),
  timeHeader: fc.constantFrom('time_#', 'time (#)', 'Time [#]', 't/#'),
  unit: fc.constantFrom('V', 'mV', 'µV', 'uV', 'nV'),
  decimals: fc.integer({ min: 1, max: 5 }),
  exponent: fc.boolean(),
  layout: fc.constantFrom('wide', 'long'),
})
type Contents = typeof contents extends fc.Arbitrary<infer T> ? T : never
type Print = typeof print extends fc.Arbitrary<infer T> ? T : never

/** A value in µV for every place; a small generator, so that a table needs only its seed. */
function valueFor(c: Contents, condition: number, channel: number, trial: number, i: number): number {
  const x = Math.sin(c.seed + 12.9898 * i + 78.233 * channel + 37.719 * condition + 11.13 * trial) * 43758.5453
  return c.sizeUv * 2 * (x - Math.floor(x) - 0.5)
}

const perUnit: Record<string, number> = { V: 1e-6, mV: 1e-3, µV: 1, uV: 1, nV: 1e3 }
const decimalShift: Record<string, number> = { V: 6, mV: 3, µV: 0, uV: 0, nV: -3 }

function write(c: Contents, p: Print): string {
  const comma = p.decimalComma && !(p.delimiter === ',' && !p.quoteAll)
  const number = (text: string): string => (comma ? text.replace('.', ',') : text)
  const cell = (text: string): string =>
    p.quoteAll || text.includes(p.delimiter) || text.includes('"') ? `"${text.replaceAll('"', '""')}"` : text
  const value = (uv: number): string => {
    const x = uv * perUnit[p.unit]
    const decimals = Math.max(0, p.decimals + decimalShift[p.unit])
    // The same decimals, written with an exponent.
    if (p.exponent && x !== 0) return number(`${x.toFixed(decimals)}e0`)
    return number(x.toFixed(decimals))
  }
  const time = (i: number): string => {
    const ms = ((c.firstSample + i) * 1000) / c.rate
    return number(p.timeUnit === 's' ? (ms / 1000).toFixed(7) : ms.toFixed(4))
  }
  const timeName = p.timeHeader.replace('#', p.timeUnit)
  const trials = Math.max(1, c.trials)
  const rows: string[][] = []
  if (p.layout === 'wide') {
    const withCondition = c.conditions.length > 1
    const names = c.channels.map((ch) => `${ch} (${p.unit})`)
    rows.push([...(withCondition ? ['condition'] : []), ...(c.trials > 0 ? ['trial'] : []), timeName, ...names])
    c.conditions.forEach((condition, k) => {
      for (let t = 0; t < trials; t++) {
        for (let i = 0; i < c.samples; i++) {
          const labels = [...(withCondition ? [condition] : []), ...(c.trials > 0 ? [String(t + 1)] : [])]
          rows.push([...labels, time(i), ...c.channels.map((_, h) => value(valueFor(c, k, h, t, i)))])
        }
      }
    })
  } else {
    rows.push(['electrode', timeName, ...(c.trials > 0 ? ['trial number'] : []), `amplitude (${p.unit})`, 'condition'])
    c.conditions.forEach((condition, k) => {
      for (let t = 0; t < trials; t++) {
        c.channels.forEach((channel, h) => {
          for (let i = 0; i < c.samples; i++) {
            const label = c.trials > 0 ? [String(t + 1)] : []
            rows.push([channel, time(i), ...label, value(valueFor(c, k, h, t, i)), condition])
          }
        })
      }
    })
  }
  const lines = rows.map((row) => row.map(cell).join(p.delimiter))
  if (p.comments) lines.splice(1, 0, '# a comment; "with', '')
  if (p.comments) lines.unshift('# one, more')
  return p.mark + lines.join(p.newline) + p.newline.repeat(p.emptyEnd)
}

describe('any table', () => {
  test('is read back from every dialect, layout and unit to the printed precision', () => {
    fc.assert(
      fc.property(contents, print, (c, p) => {
        const text = write(c, p)
        const table = readTable(text)
        if (!table.ok) throw new Error(`${table.reason} (line ${table.line})`)
        expect(table.samplingRateHz).toBe(c.rate)
        expect(table.timesMs.length).toBe(c.samples)
        table.timesMs.forEach((t, i) => {
          expect(t).toBeCloseTo(((c.firstSample + i) * 1000) / c.rate, 3)
        })
        expect(table.channels).toEqual(c.channels)
        const named = p.layout === 'long' || c.conditions.length > 1
        const decimals = Math.max(0, p.decimals + decimalShift[p.unit])
        const step = 10 ** -decimals / perUnit[p.unit]
        expect(table.roundingUv).toBeCloseTo(step, 9)
        c.conditions.forEach((condition, k) => {
          c.channels.forEach((channel, h) => {
            const w = waveformOf(table, named ? condition : 'condition', channel)
            const trials = trialsOf(table, named ? condition : 'condition', channel)
            expect(trials.length).toBe(c.trials)
            for (let i = 0; i < c.samples; i++) {
              let mean = 0
              for (let t = 0; t < Math.max(1, c.trials); t++) {
                const x = valueFor(c, k, h, t, i)
                mean += x / Math.max(1, c.trials)
                if (c.trials > 0) expect(Math.abs(trials[t][i] - x)).toBeLessThanOrEqual(0.5001 * step + 1e-9)
              }
              expect(Math.abs(w.values[i] - mean)).toBeLessThanOrEqual(0.5001 * step + 1e-9)
            }
          })
        })
      }),
      { numRuns: 150 },
    )
  })

  const settled = (result: Table | TableRefusal): void => {
    if (!result.ok) {
      expect(result.reason.length).toBeGreaterThan(5)
      expect(result.todo).toBeTruthy()
      return
    }
    expect(result.samplingRateHz).toBeGreaterThan(0)
    expect(result.waveforms.length).toBe(result.conditions.length * result.channels.length)
    expect(result.timesMs.every((t, i) => Number.isFinite(t) && (i === 0 || t > result.timesMs[i - 1]))).toBe(true)
    for (const w of result.waveforms) {
      expect(w.values.length).toBe(result.timesMs.length)
      expect(w.values.every((v) => Number.isFinite(v))).toBe(true)
    }
  }

  test('that is mutilated is read or refused in words, never half read, and never throws', () => {
    const scrap = fc.constantFrom(
      '"',
      ',',
      ';',
      '\t',
      '\n',
      '\r',
      '#',
      '\u0000',
      ' ',
      '.',
      '-',
      'e',
      'NaN',
      '1,234',
      '1.234.567',
      'inf',
      'Cz',
      'time',
      '\ufffd',
      '1e999',
      '""',
      '\n\n',
      '0',
    )
    const change = fc.record({
      at: fc.double({ min: 0, max: 1, noNaN: true }),
      remove: fc.integer({ min: 0, max: 40 }),
      insert: fc.oneof(scrap, fc.string({ maxLength: 4 })),
    })
    fc.assert(
      fc.property(contents, print, fc.array(change, { minLength: 1, maxLength: 6 }), (c, p, changes) => {
        let text = write({ ...c, samples: Math.min(c.samples, 24) }, p)
        for (const { at, remove, insert } of changes) {
          const place = Math.floor(at * text.length)
          text = text.slice(0, place) + insert + text.slice(place + remove)
        }
        settled(readTable(text))
      }),
      { numRuns: 400 },
    )
  })

  test('of any text and any options is read or refused, and never throws', () => {
    const line = fc.array(
      fc.oneof(
        fc.constantFrom('time', 'Cz', 'trial', 'condition', '0', '1', '2,5', '3.5', '', '"'),
        fc.string({ maxLength: 5 }),
      ),
      { maxLength: 5 },
    )
    const name = fc.option(fc.constantFrom('time', 'Cz', 'trial', 'column 1', 'x'), { nil: undefined })
    const options: fc.Arbitrary<TableOptions> = fc.record({
      delimiter: fc.constantFrom(undefined, ',', ';', '\t'),
      decimal: fc.constantFrom(undefined, '.', ','),
      layout: fc.constantFrom(undefined, 'wide', 'long'),
      timeColumn: name,
      valueColumn: name,
      channelColumn: name,
      trialColumn: name,
      samplingRateHz: fc.option(fc.double(), { nil: undefined }),
    })
    fc.assert(
      fc.property(
        fc.array(line, { maxLength: 30 }),
        fc.constantFrom(',', ';', '\t', ' '),
        options,
        (lines, delimiter, o) => {
          settled(readTable(lines.map((fields) => fields.join(delimiter)).join('\n'), o))
        },
      ),
      { numRuns: 400 },
    )
    fc.assert(
      fc.property(fc.string({ maxLength: 300, unit: 'binary' }), (text) => settled(readTable(text))),
      { numRuns: 300 },
    )
  })
})

describe('speed', () => {
  test('a long table of 5 MB is read in about a second, quoted or not', () => {
    const rows = ['participant,condition,channel,time_ms,value']
    for (let p = 0; rows.length < 200_000; p++) {
      for (const condition of ['rare', 'frequent']) {
        for (const channel of electrodes) {
          for (let i = 0; i < 400; i++)
            rows.push(`s${p},${condition},${channel},${(i * 2.5).toFixed(1)},${(7 * Math.sin(i / 9 + p)).toFixed(3)}`)
        }
      }
    }
    const plain = rows.join('\n')
    const quoted = plain.replaceAll('rare', '"rare"')
    expect(plain.length).toBeGreaterThan(5e6)
    for (const text of [plain, quoted]) {
      const start = performance.now()
      const table = readTable(text)
      const took = performance.now() - start
      expect(table.ok).toBe(true)
      console.log(`read ${(text.length / 1e6).toFixed(1)} MB in ${took.toFixed(0)} ms`)
      // Three times the goal, since the machine may be busy.
      expect(took).toBeLessThan(3000)
    }
  })
})

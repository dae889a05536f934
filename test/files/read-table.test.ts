import { describe, expect, test } from 'vitest'
import {
  readTable,
  type Table,
  type TableOptions,
  type TableRefusal,
  trialsOf,
  waveformOf,
} from '../../src/files/index.ts'

function read(text: string, options?: TableOptions): Table {
  const table = readTable(text, options)
  if (!table.ok) throw new Error(`${table.reason} (line ${table.line}, column ${table.column})`)
  return table
}

function refusal(text: string, options?: TableOptions): TableRefusal {
  const table = readTable(text, options)
  if (table.ok) throw new Error('was read')
  expect(table.todo).toBeTruthy()
  return table
}

function guess(table: Table, what: string) {
  return table.guesses.find((g) => g.what === what)
}

/** A value that differs for every place of a table, in µV with two decimals. */
function valueAt(i: number, k: number): number {
  return Math.round(100 * (10 * Math.sin(i / 3 + k) + k)) / 100
}

/** Rows of a wide table: a time in ms every 4 ms, then `columns` values. */
function wideRows(columns: number, n = 20, delimiter = ','): string[] {
  return Array.from({ length: n }, (_, i) =>
    [4 * i, ...Array.from({ length: columns }, (_, k) => valueAt(i, k).toFixed(2))].join(delimiter),
  )
}

const wide = ['time_ms,Cz (µV),Pz (µV)', ...wideRows(2)].join('\n')

/** A long table with a line for each condition, channel and time; `change` may drop or alter lines. */
function longTable(change: (lines: string[]) => void = () => {}): string {
  const lines = ['condition,channel,time (s),value (µV)']
  for (const [c, condition] of ['rare', 'frequent'].entries()) {
    for (const [h, channel] of ['Fz', 'Pz'].entries()) {
      for (let i = 0; i < 20; i++)
        lines.push(`${condition},${channel},${(i / 250).toFixed(3)},${valueAt(i, 2 * c + h).toFixed(2)}`)
    }
  }
  change(lines)
  return lines.join('\n')
}

describe('a wide table', () => {
  test('gives times in ms, values in µV and the sampling rate', () => {
    const table = read(wide)
    expect(table).toMatchObject({ layout: 'wide', samplingRateHz: 250, channels: ['Cz', 'Pz'], roundingUv: 0.01 })
    expect([...table.timesMs]).toEqual(Array.from({ length: 20 }, (_, i) => 4 * i))
    expect([...waveformOf(table, 'condition', 'Pz').values]).toEqual(
      Array.from({ length: 20 }, (_, i) => valueAt(i, 1)),
    )
    expect(guess(table, 'timeUnit')).toMatchObject({ value: 'ms', from: 'header' })
    expect(guess(table, 'amplitudeUnit')).toMatchObject({ value: 'µV', from: 'header' })
    expect(guess(table, 'columnsAre')).toMatchObject({ value: 'channels', from: 'inferred' })
  })

  test('is the same table with semicolons and decimal commas, with tabs, a byte order mark, CRLF, comments and empty lines', () => {
    const expected = read(wide)
    const rows = wide.split('\n')
    const variants = [
      rows.map((r) => r.replaceAll(',', ';').replaceAll('.', ',')).join('\n'),
      rows.map((r) => r.replaceAll(',', '\t')).join('\r\n'),
      rows.map((r) => r.replaceAll(',', '\t').replaceAll('.', ',')).join('\r'),
      `\ufeff${wide}\r\n\r\n\r\n`,
      `# a comment, with a comma\n\n  # "and a quote\n${rows[0]}\n# between\n${rows.slice(1).join('\n')}\n# at the end`,
      rows
        .map((r) =>
          r
            .split(',')
            .map((f) => `"${f}"`)
            .join(','),
        )
        .join('\n'),
      rows.map((r) => `${r},,`).join('\n'),
      `${wide}\n,,\n,,\n`,
      rows
        .map((r) =>
          r
            .split(',')
            .map((f) => ` ${f} `)
            .join(','),
        )
        .join('\n'),
      rows.map((r) => r.replaceAll('-', '\u2212')).join('\n'),
      rows.map((r) => r.replaceAll('µV', '\u03bcV')).join('\n'),
      rows.map((r, i) => `${i === 0 ? '' : i - 1},${r}`).join('\n'),
    ]
    for (const text of variants) {
      const table = read(text)
      expect(table.channels).toEqual(expected.channels)
      expect(table.samplingRateHz).toBe(250)
      expect(table.waveforms.map((w) => [...w.values])).toEqual(expected.waveforms.map((w) => [...w.values]))
      expect([...table.timesMs]).toEqual([...expected.timesMs])
    }
  })

  test('reads columns without electrode names as conditions, and the option overrides it', () => {
    const text = ['time_ms,A,V,AV', ...wideRows(3)].join('\n')
    const table = read(text)
    expect(table.conditions).toEqual(['A', 'V', 'AV'])
    expect(table.channels).toEqual(['channel'])
    expect(guess(table, 'columnsAre')?.from).toBe('inferred')
    const turned = read(text, { columnsAre: 'channels' })
    expect(turned.channels).toEqual(['A', 'V', 'AV'])
    expect(guess(turned, 'columnsAre')?.from).toBe('stated')
    const electrodes = read(['time_ms,C3,C4', ...wideRows(2)].join('\n'), { columnsAre: 'conditions' })
    expect(electrodes.conditions).toEqual(['C3', 'C4'])
  })

  test('converts V, mV, nV and µV from the header, and V from the size of the numbers', () => {
    const factors = { V: 1e-6, mV: 1e-3, µV: 1, nV: 1e3 }
    const expected = waveformOf(read(wide), 'condition', 'Cz').values
    for (const [unit, factor] of Object.entries(factors)) {
      const rows = wideRows(1).map((r) => `${r.split(',')[0]},${(Number(r.split(',')[1]) * factor).toExponential(6)}`)
      for (const name of [`Cz (${unit})`, `Cz [${unit}]`, `Cz_${unit}`]) {
        const table = read([`time_ms,${name}`, ...rows].join('\n'))
        expect(table.channels).toEqual(['Cz'])
        waveformOf(table, 'condition', 'Cz').values.forEach((v, i) => {
          expect(v).toBeCloseTo(expected[i], 6)
        })
      }
    }
    const volts = wideRows(1).map((r) => `${r.split(',')[0]},${(Number(r.split(',')[1]) * 1e-6).toFixed(8)}`)
    const table = read(['time_ms,Cz', ...volts].join('\n'))
    expect(guess(table, 'amplitudeUnit')).toMatchObject({ value: 'V', from: 'inferred' })
    expect(table.waveforms[0].values[5]).toBeCloseTo(expected[5], 6)
    expect(table.roundingUv).toBe(0.01)
    expect(read(['time_ms,Cz', ...volts].join('\n'), { amplitudeUnit: 'µV' }).waveforms[0].values[5]).toBeCloseTo(
      expected[5] * 1e-6,
      12,
    )
  })

  test('takes seconds and milliseconds from the header, else from the size of the steps', () => {
    const inSeconds = wideRows(1).map((r) => `${(Number(r.split(',')[0]) / 1000).toFixed(3)},${r.split(',')[1]}`)
    expect(read(['time (s),Cz', ...inSeconds].join('\n')).samplingRateHz).toBe(250)
    const inferred = read(['time,Cz', ...inSeconds].join('\n'))
    expect(inferred.samplingRateHz).toBe(250)
    expect(guess(inferred, 'timeUnit')).toMatchObject({ value: 's', from: 'inferred' })
    const ms = read(['time,Cz', ...wideRows(1)].join('\n'))
    expect(guess(ms, 'timeUnit')).toMatchObject({ value: 'ms', from: 'inferred' })
    expect(ms.samplingRateHz).toBe(250)
    expect(read(['time,Cz', ...wideRows(1)].join('\n'), { timeUnit: 's' }).samplingRateHz).toBe(0.25)
    expect(read(['time_ms,Cz', ...inSeconds].join('\n')).warnings.join()).toContain('unusual')
  })

  test('times rounded to 0.1 ms give the exact axis of their mean step, and say so', () => {
    const rows = Array.from({ length: 60 }, (_, i) => `${(((i - 26) * 1000) / 256).toFixed(1)},${valueAt(i, 0)}`)
    const table = read(['time_ms,Cz', ...rows].join('\n'))
    expect(table.samplingRateHz).toBe(256)
    table.timesMs.forEach((t, i) => {
      expect(t).toBe(((i - 26) * 1000) / 256)
    })
    expect(guess(table, 'samplingRateHz')?.why).toContain('rounded to 0.1 ms')
  })

  test('a header in a comment line above the numbers is taken', () => {
    const table = read(['# time_ms Cz', '# time_ms,Cz,Pz', ...wideRows(2)].join('\n'))
    expect(table.channels).toEqual(['Cz', 'Pz'])
  })

  test('a line of units under the header and a line that names the delimiter are understood', () => {
    const table = read(
      [
        'sep=;',
        'time;Cz;Pz',
        's;mV;mV',
        ...wideRows(2, 20, ';').map((r) => r.replace(/^\d+/, (t) => String(Number(t) / 1000))),
      ].join('\n'),
    )
    expect(table).toMatchObject({ samplingRateHz: 250, channels: ['Cz', 'Pz'], roundingUv: 10 })
    expect(waveformOf(table, 'condition', 'Pz').values[3]).toBeCloseTo(1000 * valueAt(3, 1), 9)
  })

  test('a condition called T beside the time is no second time', () => {
    expect(read(['time,T,S', ...wideRows(2)].join('\n')).conditions).toEqual(['T', 'S'])
  })

  test('a column without values is left out with a warning', () => {
    const table = read(['time_ms,Cz,Pz', ...wideRows(1).map((r) => `${r},NaN`)].join('\n'))
    expect(table.channels).toEqual(['Cz'])
    expect(table.warnings.join()).toContain('Pz')
  })

  test('a wide table with a trial column gives means and keeps the trials, as views and not as copies', () => {
    const rows = ['3', '1'].flatMap((trial, k) =>
      wideRows(2).map((r) => `${trial},${r.split(',')[0]},${valueAt(0, k)},${k}`),
    )
    const table = read(['trial,time_ms,Cz,Pz', ...rows].join('\n'))
    expect(table).toMatchObject({ layout: 'wide', trials: ['3', '1'], trialsAveraged: 2 })
    expect(waveformOf(table, 'condition', 'Pz').values[7]).toBe(0.5)
    const trials = trialsOf(table, 'condition', 'Cz')
    expect(trials.map((t) => t[3])).toEqual([valueAt(0, 0), valueAt(0, 1)])
    expect(trials[0].buffer).toBe(trials[1].buffer)
    const one = read(['trial,time_ms,Cz,Pz', ...rows].join('\n'), { trial: '1' })
    expect(one.trialsAveraged).toBe(1)
    expect(waveformOf(one, 'condition', 'Pz').values[7]).toBe(1)
  })

  test('sample numbers instead of times ask for the sampling rate', () => {
    const rows = wideRows(1).map((r, i) => `${i},${r.split(',')[1]}`)
    for (const name of ['sample', '']) {
      const text = [`${name},Cz`, ...rows].join('\n')
      expect(refusal(text).todo).toContain('sampling rate')
      const table = read(text, { samplingRateHz: 512, firstMs: -100 })
      expect(table.samplingRateHz).toBe(512)
      expect(table.timesMs[1]).toBe(-100 + 1000 / 512)
    }
  })

  test('a sampling rate that is stated takes the place of rounded times, unless they contradict it', () => {
    const rows = wideRows(1).map((r, i) => `${(3.9 * i).toFixed(1)},${r.split(',')[1]}`)
    const text = ['time_ms,Cz', ...rows].join('\n')
    expect(read(text, { samplingRateHz: 256 }).timesMs[19]).toBe((19 * 1000) / 256)
    expect(refusal(text, { samplingRateHz: 512 }).reason).toContain('not 512 Hz')
  })
})

describe('a long table', () => {
  test('is read whatever the order of its columns and the way its rows are interleaved', () => {
    const inOrder = read(longTable())
    expect(inOrder).toMatchObject({
      layout: 'long',
      conditions: ['rare', 'frequent'],
      channels: ['Fz', 'Pz'],
      samplingRateHz: 250,
      roundingUv: 0.01,
    })
    expect([...waveformOf(inOrder, 'frequent', 'Pz').values]).toEqual(
      Array.from({ length: 20 }, (_, i) => valueAt(i, 3)),
    )
    const byTime = read(
      longTable((lines) => {
        const body = lines.splice(1).sort((a, b) => Number(a.split(',')[2]) - Number(b.split(',')[2]))
        lines.push(...body)
        for (const [i, line] of lines.entries()) lines[i] = line.split(',').reverse().join(',')
      }),
    )
    for (const c of inOrder.conditions) {
      for (const ch of inOrder.channels) {
        expect([...waveformOf(byTime, c, ch).values]).toEqual([...waveformOf(inOrder, c, ch).values])
      }
    }
    for (const what of ['timeColumn', 'valueColumn', 'conditionColumn', 'channelColumn']) {
      expect(guess(inOrder, what)?.from).toBe('header')
    }
  })

  test('columns with names of their own are named by options', () => {
    const text = longTable((lines) => (lines[0] = 'grp,place,time (s),resp'))
    expect(refusal(text).line).toBeDefined()
    const table = read(text, { conditionColumn: 'grp', channelColumn: 'place', valueColumn: 'resp' })
    expect(table.conditions).toEqual(['rare', 'frequent'])
    expect(guess(table, 'valueColumn')?.from).toBe('stated')
    expect(refusal(text, { valueColumn: 'nothing' })).toMatchObject({ line: 1, column: 'nothing' })
  })

  test('of several columns with numbers the one called mean is taken, and otherwise none', () => {
    const text = longTable((lines) => {
      for (const [i, line] of lines.entries()) lines[i] = i === 0 ? line.replace('value (µV)', 'mean,sd') : `${line},1`
    })
    expect(read(text).guesses.find((g) => g.what === 'valueColumn')?.value).toBe('mean')
    expect(refusal(text.replace('mean,', 'm,')).reason).toBe('several columns may hold the values: m, sd')
    expect(read(text.replace('mean,', 'm,'), { valueColumn: 'm' }).channels).toEqual(['Fz', 'Pz'])
  })

  test('participants weigh the same in the mean, or one is chosen', () => {
    const lines = ['subject,trial,channel,time_ms,value']
    const add = (subject: string, trial: number, value: number): void => {
      for (let i = 0; i < 16; i++) lines.push(`${subject},${trial},Cz,${2 * i},${value}`)
    }
    add('s1', 1, 3)
    add('s1', 2, 3)
    add('s1', 3, 6)
    add('s2', 1, 10)
    const table = read(lines.join('\n'))
    expect(table.participants).toEqual(['s1', 's2'])
    expect(waveformOf(table, 'condition', 'Cz').values[0]).toBe(7)
    expect(table.trialsAveraged).toBe(4)
    expect(trialsOf(table, 'condition', 'Cz').map((t) => t[0])).toEqual([3, 3, 6, 10])
    const one = read(lines.join('\n'), { participant: 's1' })
    expect(waveformOf(one, 'condition', 'Cz')).toMatchObject({ averaged: 3 })
    expect(waveformOf(one, 'condition', 'Cz').values[0]).toBe(4)
    expect(trialsOf(one, 'condition', 'Cz').length).toBe(3)
    expect(refusal(lines.join('\n'), { participant: 's3' })).toMatchObject({
      reason: 'there is no participant "s3"',
      todo: 'Choose one of s1, s2.',
    })
    expect(refusal(wide, { trial: '1' }).reason).toContain('no column for a trial')
  })

  test('a sample number beside a time in seconds is not used, and a warning says so', () => {
    const table = read(
      longTable((lines) => {
        for (const [i, line] of lines.entries()) lines[i] = `${i === 0 ? 'sample num' : (i - 1) % 20},${line}`
      }),
    )
    expect(table.samplingRateHz).toBe(250)
    expect(table.warnings.join()).toContain('sample num')
  })

  test('a condition or channel that it does not have is refused with those that it has', () => {
    const table = read(longTable())
    expect(() => waveformOf(table, 'rare', 'Oz')).toThrow('channel must be one of Fz, Pz, was "Oz"')
    expect(() => trialsOf(table, 'odd', 'Fz')).toThrow('condition must be one of rare, frequent, was "odd"')
  })

  test('incomplete tables are refused with the line and what is missing', () => {
    // A line in the middle, a line at the end, a whole channel of one condition.
    const middle = refusal(longTable((lines) => lines.splice(31, 1)))
    expect(middle).toMatchObject({ line: 32, column: 'time (s)' })
    expect(middle.reason).toContain('0.04 is missing for channel Pz, condition rare')
    const end = refusal(longTable((lines) => lines.splice(40, 1)))
    expect(end).toMatchObject({ line: 40 })
    expect(end.reason).toContain('19 times')
    expect(refusal(longTable((lines) => lines.splice(41, 20))).reason).toBe(
      'channel "Fz" has no values in condition "frequent"',
    )
  })

  test('lines that the named columns do not tell apart are refused as repeated times', () => {
    const twice = refusal(longTable((lines) => lines.push(...lines.slice(1))))
    expect(twice.line).toBe(82)
    expect(twice.reason).toBe('the time 0 occurs twice for channel Fz, condition rare (lines 2 and 82)')
    expect(refusal(longTable(), { conditionColumn: null }).todo).toContain('name the columns that tell them apart')
  })
})

describe('a table that cannot be read', () => {
  const mutated = (line: number, change: (line: string) => string): string => {
    const lines = wide.split('\n')
    lines[line - 1] = change(lines[line - 1])
    return lines.join('\n')
  }
  const withCz = (value: string): string => mutated(9, (l) => l.replace(/,[^,]*/, `,${value}`))

  test.each([
    ['text in a number', withCz('abc'), 9, 'Cz (µV)', '"abc" is not a number'],
    ['a unit behind a number', withCz('5 µV'), 9, 'Cz (µV)', '"5 µV" is not a number'],
    ['an empty value', withCz(''), 9, 'Cz (µV)', 'a value is missing'],
    ['NaN', withCz('NaN'), 9, 'Cz (µV)', 'a value is missing'],
    ['n/a', withCz('n/a'), 9, 'Cz (µV)', 'a value is missing'],
    ['infinity', withCz('-inf'), 9, 'Cz (µV)', '"-inf" is not a finite number'],
    ['a number beyond all bounds', withCz('1e400'), 9, 'Cz (µV)', '"1e400" is not a finite number'],
    ['thousands and decimals', withCz('"1,234.5"'), 9, 'Cz (µV)', '"1,234.5" has separators between thousands'],
    [
      'a comma among points',
      withCz('"1,234"'),
      9,
      'Cz (µV)',
      '"1,234" has a comma where other numbers of the table have a point',
    ],
    ['a thin space', withCz('1\u202f234'), 9, 'Cz (µV)', 'separators between thousands'],
    ['too few fields', mutated(9, () => '28,1.0'), 9, undefined, 'the line has 2 fields, the header (line 1) has 3'],
    [
      'too many fields',
      mutated(9, () => '28,1,0,2,5'),
      9,
      undefined,
      'the line has 5 fields, the header (line 1) has 3',
    ],
    [
      'a repeated time',
      mutated(9, (l) => l.replace(/^28/, '24')),
      9,
      'time_ms',
      'the time 24 occurs twice (lines 8 and 9)',
    ],
    [
      'a time that goes back',
      mutated(9, (l) => l.replace(/^28/, '2')),
      9,
      'time_ms',
      'the time goes back from 24 to 2',
    ],
    ['a missing time', mutated(9, (l) => l.replace(/^28/, '')), 9, 'time_ms', 'the time is missing'],
    [
      'a gap',
      wide
        .split('\n')
        .filter((_, i) => i !== 8)
        .join('\n'),
      9,
      'time_ms',
      'there is a gap: the time jumps from 24 to 32',
    ],
    ['an uneven time', mutated(9, (l) => l.replace(/^28/, '30')), 9, 'time_ms', 'the times are not evenly spaced'],
    ['an open quote', mutated(9, () => '28,"1.0,2'), 9, undefined, 'a quote is opened'],
    ['a repeated name', mutated(1, () => 'time_ms,Cz,Cz'), 1, 'Cz', 'columns 2 and 3 have the same name "Cz"'],
    [
      'names that differ in their unit only',
      mutated(1, () => 'time_ms,Cz (µV),Cz (mV)'),
      1,
      'Cz (mV)',
      'differ in nothing but the unit',
    ],
    ['values without a name', mutated(1, () => 'time_ms,Cz,'), 1, 'column 3', 'column 3 has values but no name'],
    ['no header', wide.split('\n').slice(1).join('\n'), 1, undefined, 'the columns have no names'],
    [
      'a title above the header',
      `My ERP\n${wide}`,
      1,
      undefined,
      'the first line has one field, the lines below it have 3',
    ],
    ['15 samples', wide.split('\n').slice(0, 16).join('\n'), 16, 'time_ms', '15 samples; at least 16'],
    ['a header alone', 'time_ms,Cz\n\n', 1, undefined, 'no numbers'],
    ['one column', 'time_ms\n0\n4\n8\n', 1, undefined, 'only one column'],
    [
      'times alone',
      ['time_ms,trial', ...wideRows(0).map((r) => `${r},1`)].join('\n'),
      1,
      undefined,
      'no column with values',
    ],
    ['spaces between columns', wide.replaceAll(',', ' '), 1, undefined, 'no comma, semicolon or tab'],
    [
      'no times',
      ['Cz,Pz', ...wideRows(1)].join('\n').replace(/^4,/m, '1,').replace(/^8,/m, '0,'),
      1,
      undefined,
      'no column holds times',
    ],
  ])('%s is refused with its place', (_, text, line, column, reason) => {
    const r = refusal(text)
    expect(r.reason).toContain(reason)
    expect(r.column).toBe(column)
    expect(r.line).toBe(line)
    // The line is that of the file, whatever stands above it and however lines end.
    const shifted = refusal(`# one\r\n\r\n# two\r\n${text.replaceAll('\n', '\r\n')}`)
    expect(shifted.line).toBe(line + 3)
  })

  test('a number that can be read two ways is refused rather than misread, and read once the user says how', () => {
    const rows = Array.from({ length: 20 }, (_, i) => `${4 * i};${1 + i},${String(100 + i)}`)
    const text = ['time_ms;Cz (nV)', ...rows].join('\n')
    expect(refusal(text)).toMatchObject({ line: 2, column: 'Cz (nV)' })
    expect(refusal(text).reason).toContain('two ways')
    expect(read(text, { decimal: ',' }).waveforms[0].values[3]).toBeCloseTo(4.103e-3, 12)
    expect(refusal(text, { decimal: '.' }).reason).toContain('has a comma')
    const quoted = ['time_ms,Cz (nV)', ...Array.from({ length: 20 }, (_, i) => `${4 * i},"${1 + i},${100 + i}"`)].join(
      '\n',
    )
    expect(refusal(quoted).reason).toContain('two ways')
    // One value that can only be decimal settles it.
    expect(read(text.replace('1,100', '0,100')).waveforms[0].values[3]).toBeCloseTo(4.103e-3, 12)
  })

  test('decimal commas between commas are explained', () => {
    const text = ['time_ms,Cz', ...wideRows(1).map((r) => r.replaceAll('.', ','))].join('\n')
    expect(refusal(text).todo).toContain('semicolons')
  })

  test('line numbers count the line breaks inside quoted names', () => {
    const text = `time_ms,"Cz\nleft","Pz\n\nright"\n${wideRows(2).join('\n')}\n80,x,1`
    expect(refusal(text)).toMatchObject({ line: 25, column: 'Cz\nleft' })
  })

  test.each([
    ['', 'empty'],
    ['\n\r\n  \n', 'empty'],
    ['# only a comment\n', 'empty'],
    [`PK\u0003\u0004${'\u0000'.repeat(30)}`, 'spreadsheet workbook'],
    ['\ufffd\ufffd\u0011\ufffd\ufffd\u001a\ufffd', 'spreadsheet workbook'],
    [`0       ${' '.repeat(160)}02.03.0412.13.14256     ${' '.repeat(100)}`, 'EDF'],
    ['%PDF-1.7\n%', 'PDF'],
    ['<!DOCTYPE html><html>', 'web page'],
    ['{"a": [1, 2]}', 'JSON'],
    ['t\u0000i\u0000m\u0000e\u0000,\u0000C\u0000z\u0000\n\u00000\u0000', 'UTF-16'],
    ['\u0001\u0002\ufffd\ufffd\u0000abc\u0007', 'binary'],
  ])('%j is told for what it looks like', (text, looksLike) => {
    expect(refusal(text).reason).toContain(looksLike)
  })

  test('a text beyond the bound is refused at once', () => {
    const huge = 'time_ms,Cz\n'.padEnd(200_000_001, '0')
    const start = performance.now()
    expect(refusal(huge).reason).toContain('200 million')
    expect(performance.now() - start).toBeLessThan(200)
  })

  test('absurd options are refused in words', () => {
    expect(refusal(wide, { samplingRateHz: 0 }).reason).toContain('positive')
    expect(refusal(wide, { timeUnit: 'h' as never }).reason).toContain('timeUnit must be one of')
    expect(refusal(wide, { timeColumn: 'Cz', trialColumn: 'Cz' }).reason).toContain('at once')
  })

  test('the table on its side is told to be so', () => {
    const text = `channel,${Array.from({ length: 30 }, (_, i) => 4 * i).join(',')}\nCz,${Array.from({ length: 30 }, (_, i) => valueAt(i, 0)).join(',')}`
    expect(refusal(text).todo).toContain('transpose')
  })
})

import { renderToStaticMarkup } from 'react-dom/server'
import { describe, expect, test } from 'vitest'
import { ChainTable } from '../../src/page/chain-table.tsx'
import { FrequencyFigure } from '../../src/page/frequency-figure.tsx'
import { KernelFigure } from '../../src/page/kernel-figure.tsx'
import { drawnPins, pinDash } from '../../src/page/pin-line.tsx'
import { PinRows } from '../../src/page/pins.tsx'
import { Readout } from '../../src/page/readout.tsx'
import { stageDash } from '../../src/page/stage-dash.ts'
import { timeAxisOf } from '../../src/page/time-axis.ts'
import { readingWords } from '../../src/page/time-reading.ts'
import { TimePlot } from '../../src/page/time-plot.tsx'
import { WindowPlot } from '../../src/page/window-plot.tsx'
import { makeFrame } from '../../src/plot/index.ts'
import { evaluate } from '../../src/state/evaluate.ts'
import type { Evaluation, PinnedResult } from '../../src/state/evaluation.ts'
import { pinChain } from '../../src/state/pin-actions.ts'
import { startWorkspace, type Workspace } from '../../src/state/workspace.ts'
import { fixed } from '../../src/words/index.ts'

function evaluated(workspace: Workspace): Evaluation {
  const outcome = evaluate(workspace, null)
  if (!outcome.ok) throw new Error(outcome.problems.map(({ message }) => message).join(' '))
  return outcome.evaluation
}

const withCutoff = (workspace: Workspace, hz: number): Workspace => ({
  ...workspace,
  chain: workspace.chain.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [hz] } : spec)),
})

const start = startWorkspace()
const one = withCutoff(pinChain(start), 0.1)
const three = withCutoff(
  [1, 0.3, 3].reduce((w, hz) => pinChain(withCutoff(w, hz)), start),
  0.1,
)
const failed: Workspace = {
  ...one,
  pins: [{ name: 'too fast', chain: withCutoff(start, 400).chain, extent: 'continuous' }, ...one.pins],
}
const resultOf = (workspace: Workspace, place = 0) => evaluated(workspace).pins[place] as PinnedResult
const plain = (html: string) => html.replace(/<\/?tspan[^>]*>/g, '').replace(/<!-- -->/g, '')
const names = ['high-pass 1 Hz', 'high-pass 0.3 Hz', 'high-pass 3 Hz']

function timePlot(workspace: Workspace, cursor = 400): string {
  const evaluation = evaluated(workspace)
  const axis = timeAxisOf(evaluation.timesMs)
  const frame = makeFrame(908, 240, { top: 6, right: 0, bottom: 24, left: 44 }, 't')
  const props = { frame, evaluation, axis, windows: workspace, score: workspace.score, cursor, takenOut: true }
  const nothing = () => undefined
  return plain(renderToStaticMarkup(<TimePlot {...props} onCursor={nothing} onHold={nothing} polarity="up" />))
}

const table = (workspace: Workspace, broken = false) => {
  const evaluation = evaluated(workspace)
  return plain(
    renderToStaticMarkup(
      <ChainTable evaluation={evaluation}>
        <PinRows workspace={workspace} evaluation={evaluation} broken={broken} />
      </ChainTable>,
    ),
  )
}

describe('the rows below the chain table', () => {
  test('offer to pin the present chain, and say why not in title and description', () => {
    const button = (html: string) => /<button[^>]*id="pin-this-chain"[^>]*>/.exec(html)?.[0] ?? ''
    expect(button(table(start))).toContain('aria-disabled="false"')
    expect(button(table(three))).toContain('aria-disabled="true"')
    expect(button(table(three))).toContain('title="three chains are pinned: unpin one first"')
    expect(button(table(start, true))).toContain('title="this chain cannot be computed"')
    const described = /aria-describedby="([^"]+)"/.exec(button(table(three)))?.[1]
    expect(table(three)).toMatch(new RegExp(`id="${described}"[^>]*>three chains are pinned`))
  })

  test('give each pin its line, its name to change, and what can be done with it', () => {
    const html = table(three)
    names.forEach((name, i) => {
      expect(html).toContain(`stroke-dasharray="${pinDash(i)}"`)
      expect(html).toContain(`aria-label="${name}, rename pin ${i + 1}"`)
      expect(html).toContain(`aria-label="use ${name}: swap it with the present chain"`)
      expect(html).toContain(`aria-label="unpin ${name}"`)
    })
  })

  test('say why a pin is not drawn', () => {
    const [pin] = evaluated(failed).pins
    expect('reason' in pin && table(failed)).toContain(`Not drawn: ${'reason' in pin && pin.reason}`)
  })
})

test('pinned lines are dashed unlike one another and unlike any stage', () => {
  const dashes = [0, 1, 2].map(pinDash)
  const stages = [0, 1, 2, 3, 4, 5].map(stageDash)
  expect(new Set([...dashes, ...stages]).size).toBe(9)
})

describe('the time figure', () => {
  test('names each pinned curve with its own value at the cursor, as the slider does', () => {
    const html = timePlot(three)
    for (const [i, name] of names.entries()) {
      const value = `${fixed(resultOf(three, i).after[400], 2)} µV`
      expect(html).toContain(`>${name} ${value}<`)
      expect(readingWords(evaluated(three), 400, true)).toContain(`pinned ${name} ${value}`)
      expect(html).toContain(`stroke-dasharray="${pinDash(i)}"`)
    }
    expect(html.match(/class="pin-line"/g)).toHaveLength(3)
    expect(timePlot(start)).not.toContain('pin-line')
  })

  test('has room for pinned curves: each of their points lies inside the frame', () => {
    // Its troughs lie far below whatever the present 0.1 Hz leaves.
    const html = timePlot(one)
    const d = /<path class="pin-line" d="([^"]+)"/.exec(html)?.[1] ?? ''
    const heights = [...d.matchAll(/,(-?[\d.]+)/g)].map(([, y]) => Number(y))
    expect(heights.length).toBeGreaterThan(100)
    expect(Math.min(...heights)).toBeGreaterThan(6)
    expect(Math.max(...heights)).toBeLessThan(216)
  })

  test('a pin that failed leaves the lines of the others as they are in the table', () => {
    expect(drawnPins(evaluated(failed)).map(({ index, name }) => [index, name])).toEqual([[1, 'high-pass 1 Hz']])
    expect(timePlot(failed)).toContain(`stroke-dasharray="${pinDash(1)}"`)
    expect(timePlot(failed)).not.toContain(`stroke-dasharray="${pinDash(0)}"`)
  })
})

test('the effective window draws and names the pinned windows', () => {
  const evaluation = evaluated(one)
  const html = plain(
    renderToStaticMarkup(
      <WindowPlot
        frame={makeFrame(908, 80, { top: 2, right: 0, bottom: 2, left: 44 }, 'w')}
        window={evaluation.window!}
        workspace={one}
        axis={timeAxisOf(evaluation.timesMs)}
        windows={one}
        cursor={400}
        scale="compressed"
        pins={drawnPins(evaluation)}
      />,
    ),
  )
  expect(html).toContain(`stroke-dasharray="${pinDash(0)}"`)
  expect(html).toContain('>high-pass 1 Hz<')
})

test('the frequency figure draws the pinned whole gain, names it, and reads it out', () => {
  const html = plain(
    renderToStaticMarkup(
      <FrequencyFigure evaluation={evaluated(one)} workspace={one} caption={() => ''} height={178} width={476} />,
    ),
  )
  expect(html).toContain(`stroke-dasharray="${pinDash(0)}"`)
  expect(html).toContain('>high-pass 1 Hz<')
  // to the grid of the curve: the amplifier moves the half-amplitude by less than a hundredth
  expect(html).toMatch(/Pinned high-pass 1 Hz: half the amplitude at 1\.00 Hz and 30\.\d Hz/)
})

test('the kernel figure draws and names the pinned kernel', () => {
  const html = plain(
    renderToStaticMarkup(<KernelFigure evaluation={evaluated(one)} caption={() => ''} height={148} width={476} />),
  )
  expect(html).toContain(`stroke-dasharray="${pinDash(0)}"`)
  expect(html).toContain('>high-pass 1 Hz<')
  expect(html).toContain('Beside it the pinned high-pass 1 Hz.')
})

describe('the readout', () => {
  const cellsOf = (workspace: Workspace) => {
    const html = plain(
      renderToStaticMarkup(<Readout evaluation={evaluated(workspace)} workspace={workspace} problems={[]} />),
    )
    return html.split('<tr').slice(1)
  }
  const pinned = (row: string) =>
    [...row.matchAll(/<td class="pin-cell">(.*?)<\/td>/g)].map(([, cell]) => cell.replace(/<[^>]*>/g, ''))

  test('has a column for each pin, between after and change', () => {
    const [head, ...rows] = cellsOf(three)
    const heads = head.split('<th').map((cell) => cell.replace(/^[^>]*>/, '').replace(/<[^>]*>/g, ''))
    expect(heads.slice(3, 7)).toEqual(['after', ...names.map((name) => `after the pinned ${name}`)])
    expect(heads[7]).toBe('change')
    for (const name of names) expect(head).toContain(`title="${name}"`)
    const decimals = { µV: 2, ms: 1, µV·s: 3 } as const
    resultOf(three).rows.forEach((row, i) => {
      const wanted = names.map((_, place) => {
        const value = resultOf(three, place).rows[i].after
        return typeof value === 'number' ? `${fixed(value, decimals[row.unit])}${row.unit}` : value
      })
      expect(pinned(rows[i])).toEqual(wanted)
    })
    const noise = names.map((_, place) => `${fixed(resultOf(three, place).precision?.after ?? Number.NaN, 2)}µV`)
    expect(pinned(rows.at(-1) ?? '')).toEqual(noise)
  })

  test('every row spans the same columns, with a latency as the score as well', () => {
    for (const workspace of [three, { ...three, score: { ...three.score, kind: 'peak-latency' as const } }]) {
      const widths = cellsOf(workspace).map((row) =>
        [...row.matchAll(/<t[hd]([^>]*)>/g)].reduce((sum, [, attributes]) => {
          return sum + Number(/colSpan="(\d+)"/i.exec(attributes)?.[1] ?? 1)
        }, 0),
      )
      expect(new Set(widths).size).toBe(1)
    }
  })

  test('says why a pin has no column', () => {
    const html = plain(
      renderToStaticMarkup(<Readout evaluation={evaluated(failed)} workspace={failed} problems={[]} />),
    )
    expect(html).toContain('No column for the pinned too fast: ')
    expect(html.match(/<th[^>]*pin-head/g)).toHaveLength(1)
  })
})

import { firstSight, readoutOf, type Workspace } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'
import type { Workbench } from './page-models/workbench.ts'

/** The first sight with another cutoff of its high-pass. */
function withHighPass(hz: number): Workspace {
  const workspace = firstSight()
  const chain = workspace.chain.map((spec) => (spec.design === 'butterworth' ? { ...spec, cutoffsHz: [hz] } : spec))
  return { ...workspace, chain }
}

const handle = (workbench: Workbench) => workbench.slider('high-pass, half-amplitude cutoff')

async function cutoffIn(workbench: Workbench): Promise<number> {
  return Number(/^[\d.]+/.exec((await workbench.token('stage 2, cutoff').textContent()) ?? '')?.[0])
}

test('a cutoff is dragged in the frequency figure, and sentence, chain table, kernel and readout change with it', async ({
  workbench,
}) => {
  // Hertz per pixel of the logarithmic axis, from the handles at 1 and at 30 Hz.
  const low = await workbench.gripOf(handle(workbench))
  const high = await workbench.gripOf(workbench.slider('low-pass, half-amplitude cutoff'))
  const ratioPerPixel = 30 ** (1 / (high.x - low.x))
  const table = await workbench.chainRows()
  const kernel = await workbench.descriptionOf('Kernel: impulse response')

  await workbench.drag(handle(workbench), -40)
  const hz = await cutoffIn(workbench)
  // Rounded to three digits; a handle's box is known to half a pixel.
  expect(Math.abs(Math.log(hz / ratioPerPixel ** -40)), 'relative distance from the pointer').toBeLessThan(0.03)
  expect(hz).toBeLessThan(0.6)

  const [amplifier, highPass, lowPass, ...rest] = await workbench.chainRows()
  expect(amplifier).toEqual(table[0])
  expect(lowPass).toEqual(table[2])
  expect(highPass[1]).toBe(`${Number(hz.toPrecision(2))} Hz`)
  // Half-power of a both-ways Butterworth of order 2 per pass: gain = 1/(1 + (fc/f)⁴) = 1/√2, so f = 1.2465·(half-amplitude) far
  // below half the sampling rate.
  expect(Number(highPass[2].replace(' Hz', '')) / hz, 'half-power over half-amplitude').toBeCloseTo(1.2465, 1)
  expect(rest).not.toEqual(table.slice(3))
  expect(await workbench.descriptionOf('Kernel: impulse response')).not.toBe(kernel)
  await workbench.expectReadout(readoutOf(withHighPass(hz)))

  await workbench.button('Undo').click()
  await expect(workbench.token('stage 2, cutoff')).toHaveText('1 Hz')
  expect(await workbench.chainRows()).toEqual(table)
  await workbench.expectReadout(readoutOf(firstSight()))
  await workbench.button('Redo').click()
  await workbench.expectReadout(readoutOf(withHighPass(hz)))
  expect(await cutoffIn(workbench)).toBe(hz)
})

test('the keyboard moves a cutoff by one per cent, with shift by ten steps; Escape ends a drag where it began', async ({
  workbench,
}) => {
  await handle(workbench).press('ArrowRight')
  await expect(workbench.token('stage 2, cutoff')).toHaveText('1.01 Hz')
  await workbench.expectReadout(readoutOf(withHighPass(1.01)))
  await handle(workbench).press('Shift+ArrowLeft')
  await expect(workbench.token('stage 2, cutoff')).toHaveText('0.914 Hz')
  await workbench.expectReadout(readoutOf(withHighPass(0.914)))

  await workbench.startDrag(handle(workbench), 50)
  await expect(workbench.token('stage 2, cutoff')).not.toHaveText('0.914 Hz')
  await workbench.page.keyboard.press('Escape')
  await expect(workbench.token('stage 2, cutoff')).toHaveText('0.914 Hz')
  await workbench.page.mouse.up()
  await workbench.expectReadout(readoutOf(withHighPass(0.914)))
})

test('gain, phase and group delay, and per cent and decibel, say the same points', async ({ workbench }) => {
  const cursor = workbench.slider('frequency cursor')
  await cursor.press('Home')
  await expect(workbench.slider('high-pass, half-amplitude cutoff')).toHaveAttribute('aria-valuetext', '1.00 Hz')
  const inPercent = await workbench.descriptionOf('Frequency: gain of each stage and of the whole chain')
  expect(inPercent).toContain(
    'The whole chain passes half the amplitude at 1.00 Hz and 30.0 Hz and half the power at 1.25 Hz and 29.1 Hz',
  )
  await workbench.button('gain in: per cent of amplitude; switch to dB').click()
  expect(await workbench.descriptionOf('Frequency: gain of each stage and of the whole chain')).toBe(inPercent)
  await workbench.button('Frequency figure shows: gain; switch to phase').click()
  expect(await workbench.descriptionOf('Frequency: phase')).toContain('Phase in degrees of the whole chain')
  await workbench.button('Frequency figure shows: phase; switch to group delay').click()
  expect(await workbench.descriptionOf('Frequency: group delay')).toContain(
    'Group delay in milliseconds of the whole chain',
  )
})

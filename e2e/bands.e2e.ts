import { firstSight, readoutOf, type Workspace } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'
import type { Workbench } from './page-models/workbench.ts'

/** Milliseconds per pixel of the time axis, from the two handles of the baseline, which is 200 ms long at first sight. */
async function msPerPixel(workbench: Workbench): Promise<number> {
  const from = await workbench.gripOf(workbench.slider('baseline, start'))
  const to = await workbench.gripOf(workbench.slider('baseline, end'))
  return 200 / (to.x - from.x)
}

/** The window that a token states. */
async function windowIn(workbench: Workbench, token: string): Promise<{ fromMs: number; toMs: number }> {
  const text = (await workbench.token(token).textContent()) ?? ''
  const [fromMs, toMs] = [...text.matchAll(/[−-]?\d+(\.\d+)?/g)].map(([number]) => Number(number.replace('−', '-')))
  return { fromMs, toMs }
}

const withScore = (fromMs: number, toMs: number): Workspace => {
  const workspace = firstSight()
  return { ...workspace, score: { ...workspace.score, fromMs, toMs } }
}

test('the score window is dragged, sentence and readout follow it, and one undo takes the whole drag back', async ({
  workbench,
}) => {
  const perPixel = await msPerPixel(workbench)
  await workbench.drag(workbench.slider('score window, whole'), 150)
  const { fromMs, toMs } = await windowIn(workbench, 'score window')
  // It lands on a sample, which lie 2 ms apart, within half a sample of where the pointer went.
  expect(toMs - fromMs).toBe(60)
  expect(Math.abs(fromMs - (80 + 150 * perPixel)), 'ms beside the pointer').toBeLessThanOrEqual(1.01)
  expect((fromMs + 400) % 2).toBe(0)
  await workbench.expectReadout(readoutOf(withScore(fromMs, toMs)))
  expect(await workbench.descriptionOf('Waveform over time')).toContain(`Score window ${fromMs} to ${toMs} ms`)

  await workbench.button('Undo').click()
  await expect(workbench.token('score window')).toHaveText('80 to 140 ms')
  await workbench.expectReadout(readoutOf(firstSight()))
  await expect(workbench.button('Undo')).toBeDisabled()
  await workbench.button('Redo').click()
  await workbench.expectReadout(readoutOf(withScore(fromMs, toMs)))
})

test('during the drag sentence and readout already follow, and Escape puts back what was there', async ({
  workbench,
}) => {
  await workbench.edit('score window')
  await workbench.startDrag(workbench.slider('score window, end'), 90)
  await expect(workbench.token('score window')).not.toHaveText('80 to 140 ms')
  const { fromMs, toMs } = await windowIn(workbench, 'score window')
  expect(fromMs).toBe(80)
  expect(toMs).toBeGreaterThan(200)
  await workbench.expectReadout(readoutOf(withScore(80, toMs)))
  await expect(workbench.field('to')).toHaveValue(String(toMs))

  await workbench.page.keyboard.press('Escape')
  await expect(workbench.token('score window')).toHaveText('80 to 140 ms')
  await workbench.page.mouse.up()
  await workbench.expectReadout(readoutOf(firstSight()))
  await expect(workbench.button('Undo')).toBeDisabled()
  // That Escape was the drag's: the editor stays, a second one closes it.
  await expect(workbench.field('to')).toHaveValue('140')
  await workbench.closeEditor()
})

test('the keyboard moves a window by a sample, with shift by ten, and to the ends of the epoch', async ({
  workbench,
}) => {
  const whole = workbench.slider('score window, whole')
  await whole.press('ArrowRight')
  await expect(workbench.token('score window')).toHaveText('82 to 142 ms')
  await whole.press('Shift+ArrowRight')
  await expect(workbench.token('score window')).toHaveText('102 to 162 ms')
  await workbench.slider('score window, end').press('ArrowLeft')
  await expect(workbench.token('score window')).toHaveText('102 to 160 ms')
  await workbench.slider('score window, start').press('Shift+ArrowLeft')
  await expect(workbench.token('score window')).toHaveText('82 to 160 ms')
  await workbench.expectReadout(readoutOf(withScore(82, 160)))
  await whole.press('End')
  await expect(workbench.token('score window')).toHaveText('922 to 1000 ms')
  await workbench.expectReadout(readoutOf(withScore(922, 1000)))

  await workbench.slider('baseline, start').press('Home')
  await expect(workbench.token('baseline')).toHaveText('−400 to 0 ms')
  await workbench.expectReadout(readoutOf({ ...withScore(922, 1000), baseline: { fromMs: -400, toMs: 0 } }))
})

test('a drag in which the hand rests for seconds is still one step of undo', async ({ workbench }) => {
  const { page } = workbench
  const whole = workbench.slider('score window, whole')
  const { x, y } = await workbench.gripOf(whole)
  await page.clock.setFixedTime('2026-01-01T12:00:00Z')
  await workbench.startDrag(whole, 60)
  await expect(workbench.token('score window')).not.toHaveText('80 to 140 ms')
  await page.clock.setFixedTime('2026-01-01T12:00:30Z')
  await page.mouse.move(x + 120, y, { steps: 4 })
  await page.mouse.up()
  await workbench.button('Undo').click()
  await expect(workbench.token('score window')).toHaveText('80 to 140 ms')
  await expect(workbench.button('Undo')).toBeDisabled()
})

test('two drags of one window are two steps of undo', async ({ workbench }) => {
  // however quickly they follow one another
  await workbench.page.clock.setFixedTime('2026-01-01T12:00:00Z')
  await workbench.drag(workbench.slider('score window, whole'), 60)
  const first = await workbench.token('score window').textContent()
  await workbench.drag(workbench.slider('score window, whole'), 60)
  await expect(workbench.token('score window')).not.toHaveText(first ?? '')
  await workbench.page.keyboard.press('Control+Z')
  await expect(workbench.token('score window')).toHaveText(first ?? '')
  await workbench.page.keyboard.press('Control+Z')
  await expect(workbench.token('score window')).toHaveText('80 to 140 ms')
  await workbench.page.keyboard.press('Control+Shift+Z')
  await expect(workbench.token('score window')).toHaveText(first ?? '')
})

import type { Locator } from '@playwright/test'
import { firstSight, readoutOf, SCENARIOS } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'
import type { Workbench } from './page-models/workbench.ts'

interface Box {
  name: string
  left: number
  top: number
  right: number
  bottom: number
}

/** Boxes of what is visible, in pixels of the page; phrases that break over lines have a box for each line. */
async function boxesOf(locator: Locator): Promise<Box[]> {
  return locator.evaluateAll((nodes) =>
    nodes.flatMap((node) =>
      [...node.getClientRects()]
        .filter(({ width, height }) => width > 1 && height > 1)
        .map((rect) => ({
          name: (node.getAttribute('aria-label') ?? node.textContent ?? '').replace(/\s+/g, ' ').trim(),
          left: rect.left + scrollX,
          top: rect.top + scrollY,
          right: rect.right + scrollX,
          bottom: rect.bottom + scrollY,
        })),
    ),
  )
}

/** Pairs that cover each other by more than a pixel; lines of a paragraph may touch with their leading. */
function overlaps(boxes: Box[], slack = 1): string[] {
  return boxes.flatMap((a, i) =>
    boxes
      .slice(i + 1)
      .filter(
        (b) =>
          b.name !== a.name &&
          Math.min(a.right, b.right) - Math.max(a.left, b.left) > slack &&
          Math.min(a.bottom, b.bottom) - Math.max(a.top, b.top) > slack,
      )
      .map((b) => `${a.name} covers ${b.name}`),
  )
}

async function expectNoSidewaysScrolling(workbench: Workbench): Promise<void> {
  // figures follow a new width in the frame after it
  const beyond = () => workbench.page.evaluate(() => document.documentElement.scrollWidth - innerWidth)
  await expect.poll(beyond, { message: 'pixels that the page is wider than its window' }).toBeLessThanOrEqual(0)
}

async function expectNothingCovered(workbench: Workbench): Promise<void> {
  const { page } = workbench
  // words in figure heads, header and sentence: what is pressed must not lie under something else
  const heads = page.getByRole('main').getByRole('heading', { level: 2 })
  const buttons = page.getByRole('button').locator('visible=true')
  expect(overlaps([...(await boxesOf(heads)), ...(await boxesOf(buttons))], 6), 'what covers what').toEqual([])

  // The large blocks stand one beside or under the other.
  const blocks = [
    ...(await boxesOf(workbench.sentence())),
    ...(await boxesOf(workbench.chainTable())),
    ...(await boxesOf(page.locator('svg.plot-figure'))),
    ...(await boxesOf(page.locator('.figure-head'))),
    ...(await boxesOf(workbench.page.getByRole('region', { name: 'Readout' }))),
  ]
  expect(overlaps(blocks, 2), 'which block covers which').toEqual([])
  // sentence, table, three figures or (with a window) four, with their heads, readout
  expect(blocks.length).toBeGreaterThanOrEqual(10)
}

test('at 1440 × 900 sentence, figures and readout are all visible without scrolling, in every scenario', async ({
  workbench,
}) => {
  for (const scenario of SCENARIOS) {
    await workbench.edit('scenario or file in use')
    await workbench.editor().getByRole('button', { name: scenario.title, exact: true }).click()
    await expect(workbench.token('scenario or file in use')).toHaveText(scenario.title)
    await expectNoSidewaysScrolling(workbench)
    const boxes = [
      ...(await boxesOf(workbench.sentence())),
      ...(await boxesOf(workbench.page.locator('svg.plot-figure'))),
      ...(await boxesOf(workbench.readoutTable().getByRole('row'))),
    ]
    const lowest = Math.max(...boxes.map((box) => box.bottom))
    expect(lowest, `lowest edge of “${scenario.title}”`).toBeLessThanOrEqual(900)
    await expectNothingCovered(workbench)
  }
})

for (const [width, height] of [
  [1024, 768],
  [390, 844],
])
  test(`at ${width} × ${height} nothing runs off or over anything, and tokens can be edited`, async ({ workbench }) => {
    await workbench.page.setViewportSize({ width, height })
    await expectNoSidewaysScrolling(workbench)
    await expectNothingCovered(workbench)

    await workbench.edit('stage 2, cutoff')
    await expect(workbench.field('cutoff')).toBeInViewport()
    await workbench.field('cutoff').fill('0.5')
    await expect(workbench.token('stage 2, cutoff')).toHaveText('0.5 Hz')
    const chain = firstSight().chain.map((spec) =>
      spec.design === 'butterworth' ? { ...spec, cutoffsHz: [0.5] } : spec,
    )
    await workbench.expectReadout(readoutOf({ ...firstSight(), chain }))
    await expectNoSidewaysScrolling(workbench)
    await workbench.closeEditor()

    await workbench.drag(workbench.slider('score window, whole'), 40)
    await expect(workbench.token('score window')).not.toHaveText('80 to 140 ms')
    await workbench.page.keyboard.press('?')
    await expect(workbench.page.getByRole('region', { name: 'Help' })).toBeVisible()
    await expectNoSidewaysScrolling(workbench)
  })

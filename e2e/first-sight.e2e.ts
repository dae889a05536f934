import { evaluated, firstSight, printed, readoutOf, SCENARIOS, workspaceOf } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'

test('first sight shows the false early deflection with the numbers of the core', async ({ workbench }) => {
  const workspace = firstSight()
  const { rows, curves, chosen } = evaluated(workspace)
  const [score] = rows
  if (typeof score.before !== 'number' || typeof score.after !== 'number') throw new Error('the score has a value')
  // The waveform has nothing there; what the chain delivers there has to be worth the name of a component.
  expect(Math.abs(score.before), 'before, µV').toBeLessThan(0.1)
  expect(score.after, 'after, µV').toBeLessThan(-1)

  await workbench.expectReadout(readoutOf(workspace))
  const after = `${printed(score.after, 2)} µV`
  expect(await workbench.descriptionOf('Waveform over time')).toContain(`score after the chain: ${after}`)
  expect(await workbench.sentenceText()).toContain('half-amplitude 1 Hz after both passes')

  // The sentence under the figure says that it was not in the input.
  await expect(workbench.page.getByText(`The deflection of ${after} at 80–140 ms was not in the input.`)).toBeVisible()

  // The cursor rests where the waveform is largest and reads the curves there.
  const { before, after: filtered, takenOut } = curves[chosen]
  const at = before.reduce((best, value, i) => (Math.abs(value) > Math.abs(before[best]) ? i : best), 0)
  await expect(workbench.slider('cursor')).toHaveAttribute(
    'aria-valuetext',
    `400 ms: before ${printed(before[at], 2)} µV, after ${printed(filtered[at], 2)} µV, taken out ${printed(takenOut[at], 2)} µV`,
  )
})

for (const scenario of SCENARIOS)
  test(`the scenario “${scenario.title}” opens without a problem and with the numbers of the core`, async ({
    workbench,
  }) => {
    await workbench.edit('scenario or file in use')
    await workbench.editor().getByRole('button', { name: scenario.title, exact: true }).click()
    await expect(workbench.token('scenario or file in use')).toHaveText(scenario.title)
    await workbench.expectReadout(readoutOf(workspaceOf(scenario)))
    await expect(workbench.problems()).toHaveCount(0)
    await expect(workbench.figures()).not.toHaveClass(/stale/)
  })

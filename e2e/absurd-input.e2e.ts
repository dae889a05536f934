import { evaluated, firstSight, readoutOf, type Workspace } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'
import type { Workbench } from './page-models/workbench.ts'

/** The token is marked, the words say what is wrong, and the last good figures stay, dimmed. */
async function expectProblem(
  workbench: Workbench,
  token: string,
  words: string | RegExp,
  last: Workspace,
): Promise<void> {
  await expect(workbench.problems().filter({ hasText: words }).first()).toBeVisible()
  await expect(workbench.token(token)).toHaveAttribute('aria-invalid', 'true')
  await expect(workbench.token(token)).toHaveAccessibleDescription(words)
  await expect(workbench.figures()).toHaveClass(/stale/)
  await workbench.expectReadout(readoutOf(last))
  const { rows } = evaluated(last)
  expect(rows.length).toBeGreaterThan(5)
}

async function expectMended(workbench: Workbench, now: Workspace): Promise<void> {
  await expect(workbench.problems()).toHaveCount(0)
  await expect(workbench.top().locator('[aria-invalid]')).toHaveCount(0)
  await expect(workbench.figures()).not.toHaveClass(/stale/)
  await workbench.expectReadout(readoutOf(now))
}

test('a cutoff above half the sampling rate is refused in words at its token, until it is mended', async ({
  workbench,
}) => {
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('300')
  await expectProblem(workbench, 'stage 2, cutoff', /cutoff must lie between 0 and 250 .*was 300/, firstSight())
  expect(await workbench.sentenceText()).toContain('half-amplitude 300 Hz after both passes')
  await expect(workbench.editor()).not.toContainText('Design cutoff')
  for (const absurd of ['0', '-2', '250', '1e9']) {
    await workbench.field('cutoff').fill(absurd)
    await expectProblem(workbench, 'stage 2, cutoff', /cutoff must lie between 0 and 250/, firstSight())
  }
  await workbench.field('cutoff').fill('1')
  await expectMended(workbench, firstSight())
})

test('a transition that reaches 0 Hz or half the sampling rate is refused', async ({ workbench }) => {
  await workbench.edit('stage 3, transition width')
  await workbench.field('transition width').fill('70')
  await expectProblem(workbench, 'stage 3, transition width', /transition/, firstSight())
  await workbench.field('transition width').fill('7.5')
  await expectMended(workbench, firstSight())
  await workbench.edit('stage 3, cutoff')
  await workbench.field('cutoff').fill('249')
  await expect(workbench.problems().first()).toContainText(/transition|half the sampling rate/)
  await expect(workbench.figures()).toHaveClass(/stale/)
  await workbench.field('cutoff').fill('30')
  await expectMended(workbench, firstSight())
})

test('an order of 0, 13 or 2.5 is refused', async ({ workbench }) => {
  await workbench.edit('stage 2, order')
  for (const absurd of ['0', '13', '2.5']) {
    await workbench.field('order of one pass').fill(absurd)
    await expectProblem(
      workbench,
      'stage 2, order',
      new RegExp(`order must be .*was ${absurd.replace('.', '\\.')}`),
      firstSight(),
    )
  }
  await workbench.button('Undo').click()
  await expectMended(workbench, firstSight())
})

test('an empty field and words in a field say so at the field, and change nothing', async ({ workbench }) => {
  await workbench.edit('stage 2, cutoff')
  const field = workbench.field('cutoff')
  for (const [typed, words] of [
    ['', 'cutoff is empty: write a number'],
    ['fast', '“fast” is no number'],
  ]) {
    await field.fill(typed)
    await expect(field).toHaveAttribute('aria-invalid', 'true')
    await expect(field).toHaveAccessibleDescription(words)
    await expect(workbench.token('stage 2, cutoff')).toHaveText('1 Hz')
    await workbench.expectReadout(readoutOf(firstSight()))
  }
  await field.fill('2,5')
  await expect(field).not.toHaveAttribute('aria-invalid', 'true')
  await expect(workbench.token('stage 2, cutoff')).toHaveText('2.5 Hz')
  await field.fill('')
  await field.blur()
  await expect(field).toHaveValue('2.5')
})

test('a score window and a baseline outside the epoch, and a window that ends before it begins, are refused', async ({
  workbench,
}) => {
  await workbench.edit('score window')
  await workbench.field('to').fill('1400')
  await expectProblem(workbench, 'score window', /score window must lie in the epoch/, firstSight())
  await workbench.field('to').fill('20')
  await expectProblem(workbench, 'score window', /score window/, firstSight())
  await workbench.field('to').fill('140')
  await expectMended(workbench, firstSight())

  await workbench.edit('baseline')
  await workbench.field('from').fill('-900')
  await expectProblem(workbench, 'baseline', /baseline window must lie in the epoch/, firstSight())
  await workbench.field('from').fill('-200')
  await expectMended(workbench, firstSight())
})

test('no trials and a sampling rate of 0 are refused', async ({ workbench }) => {
  await workbench.edit('number of trials')
  await workbench.field('trials').fill('0')
  await expectProblem(
    workbench,
    'number of trials',
    'The number of trials must be a whole number from 1 to 1000000, was 0.',
    firstSight(),
  )
  await workbench.field('trials').fill('40')
  await expectMended(workbench, firstSight())
  await workbench.edit('sampling rate')
  await workbench.field('sampling rate').fill('0')
  await expectProblem(workbench, 'sampling rate', /sampling rate/, firstSight())
  await workbench.field('sampling rate').fill('500')
  await expectMended(workbench, firstSight())
})

test('several things that are wrong are all said, and each can be mended by itself', async ({ workbench }) => {
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('300')
  await workbench.edit('number of trials')
  await workbench.field('trials').fill('0')
  await expect(workbench.problems()).toHaveCount(3) // the editor's own among them
  await expectProblem(workbench, 'stage 2, cutoff', /cutoff must lie between/, firstSight())
  await workbench.field('trials').fill('40')
  await expectProblem(workbench, 'stage 2, cutoff', /cutoff must lie between/, firstSight())
  await workbench.edit('stage 2, cutoff')
  await workbench.field('cutoff').fill('1')
  await expectMended(workbench, firstSight())
})

test('epochs that are not longer than a filter’s padding are refused with both lengths', async ({ workbench }) => {
  await workbench.edit('what the chain is applied to')
  await workbench.choose('what the chain is applied to', 'the cut-out epochs')
  await workbench.edit('stage 3, transition width')
  await workbench.field('transition width').fill('1')
  await expect(workbench.problems().first()).toContainText(/needs \d+ samples, the epoch has 701/)
  await expect(workbench.token('what the chain is applied to')).toHaveAttribute('aria-invalid', 'true')
  await expect(workbench.figures()).toHaveClass(/stale/)
  await workbench.field('transition width').fill('7.5')
  await expectMended(workbench, { ...firstSight(), extent: 'epochs' })
})

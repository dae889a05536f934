import { readFileSync } from 'node:fs'
import { firstSight, readoutOf } from './core-numbers.ts'
import { expect, test } from './fixtures.ts'
import { type GivenFile, textFile, type Workbench } from './page-models/workbench.ts'

const good = readFileSync(new URL('./tables/two-conditions.csv', import.meta.url), 'utf8')

const lines = (count: number, time: (i: number) => string, value: (i: number) => string) =>
  ['time_ms,Cz', ...Array.from({ length: count }, (_, i) => `${time(i)},${value(i)}`)].join('\n')
const sine = (i: number) => Math.sin(i / 5).toFixed(4)

const BAD: { what: string; file: GivenFile; says: RegExp }[] = [
  {
    what: 'binary garbage',
    file: {
      name: 'garbage.csv',
      mimeType: 'text/csv',
      // a fixed sequence without any meaning
      buffer: Buffer.from(Array.from({ length: 5000 }, (_, i) => (i * 7919 + (i >> 3) * 104729) % 256)),
    },
    says: /^garbage\.csv was not opened.*\. The work on screen is as it was\./,
  },
  {
    what: 'text in a number',
    file: textFile(
      'text.csv',
      lines(
        40,
        (i) => String(i * 4),
        (i) => (i === 20 ? 'n/k' : sine(i)),
      ),
    ),
    says: /^text\.csv was not opened \(line 22, column “Cz”\): .*n\/k/,
  },
  {
    what: 'uneven sampling',
    file: textFile(
      'uneven.csv',
      lines(40, (i) => String(i * 4 + (i % 3 === 1 ? 1.5 : 0)), sine),
    ),
    says: /^uneven\.csv was not opened.*(even|step)/i,
  },
  {
    what: 'a gap',
    file: textFile(
      'gap.csv',
      lines(40, (i) => String(i < 20 ? i * 4 : i * 4 + 40), sine),
    ),
    says: /^gap\.csv was not opened \(line 22/,
  },
  {
    what: 'ten samples',
    file: textFile(
      'short.csv',
      lines(10, (i) => String(i * 4), sine),
    ),
    says: /^short\.csv was not opened.*16/,
  },
  {
    what: 'two columns of one name',
    file: textFile(
      'twice.csv',
      lines(40, (i) => String(i * 4), sine)
        .replace('time_ms,Cz', 'time_ms,Cz,Cz')
        .replaceAll(/^(\d+),(.*)$/gm, '$1,$2,$2'),
    ),
    says: /^twice\.csv was not opened.*Cz/,
  },
  { what: 'an empty file', file: textFile('empty.csv', ''), says: /^empty\.csv was not opened/ },
  {
    what: 'a workspace that is none',
    file: { name: 'work.json', mimeType: 'application/json', buffer: Buffer.from('{"version":1,"title":3}') },
    says: /^work\.json was not opened: .*title/,
  },
  {
    what: 'a workspace cut off',
    file: { name: 'cut.json', mimeType: 'application/json', buffer: Buffer.from('{"version":1,"tit') },
    says: /^cut\.json was not opened/,
  },
]

const message = (workbench: Workbench) => workbench.top().getByRole('alert')

test('a bad file is refused in words and leaves the work on screen exactly as it was', async ({ workbench }) => {
  await workbench.drag(workbench.slider('score window, whole'), 30)
  const sentence = await workbench.sentenceText()
  const readout = await workbench.readout()
  for (const { what, file, says } of BAD)
    await test.step(what, async () => {
      await workbench.openFile(file)
      await expect(message(workbench)).toHaveText(says)
      expect(await workbench.sentenceText()).toBe(sentence)
      expect(await workbench.readout()).toEqual(readout)
      await expect(workbench.figures()).not.toHaveClass(/stale/)
      await workbench.top().getByRole('button', { name: 'dismiss' }).click()
      await expect(message(workbench)).toHaveCount(0)
    })
  // Not even a step of undo was made.
  await workbench.button('Undo').click()
  await workbench.expectReadout(readoutOf(firstSight()))
  await expect(workbench.button('Undo')).toBeDisabled()
})

test('a bad file after a good one leaves the good one, with its editor', async ({ workbench }) => {
  await workbench.openFile(textFile('two-conditions.csv', good))
  await expect(workbench.editor()).toContainText('2 channels, 2 conditions')
  const sentence = await workbench.sentenceText()
  const readout = await workbench.readout()
  await workbench.drop(BAD[0].file)
  await expect(message(workbench)).toHaveText(BAD[0].says)
  expect(await workbench.sentenceText()).toBe(sentence)
  expect(await workbench.readout()).toEqual(readout)
  // The next good file clears the message.
  await workbench.drop(textFile('again.csv', good))
  await expect(message(workbench)).toHaveCount(0)
  await expect(workbench.token('scenario or file in use')).toHaveText('again.csv')
})

test('two files dropped at once are refused together', async ({ workbench }) => {
  await workbench.drop(textFile('a.csv', good), textFile('b.csv', good))
  await expect(message(workbench)).toHaveText(/^Several files were dropped: drop one at a time\./)
  await workbench.expectReadout(readoutOf(firstSight()))
})

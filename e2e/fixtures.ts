import AxeBuilder from '@axe-core/playwright'
import { test as base, expect, type Page } from '@playwright/test'
import { type Theme, Workbench } from './page-models/workbench.ts'

export { expect }

interface Fixtures {
  /** The page, opened and ready. */
  workbench: Workbench
  /** What went wrong behind the page's back; a journey fails where anything is left in it. */
  problems: string[]
}

/**
 * Every journey fails on an uncaught error, on an error in the console, and on any request that leaves the page's origin
 * (`blob:` and `data:` stay inside the browser), workers and sockets included.
 */
export const test = base.extend<Fixtures>({
  problems: [
    async ({ context, page, baseURL }, use) => {
      const problems: string[] = []
      const origin = new URL(baseURL ?? '').origin
      const watchAddress = (address: string) => {
        const url = new URL(address)
        const inside = url.protocol === 'blob:' || url.protocol === 'data:' || url.origin === origin
        if (!inside) problems.push(`a request left the page: ${address}`)
      }
      context.on('request', (request) => watchAddress(request.url()))
      const watchPage = (watched: Page) => {
        watched.on('pageerror', (error) => problems.push(`uncaught: ${error.stack ?? error.message}`))
        watched.on('websocket', (socket) => watchAddress(socket.url()))
        watched.on('console', (message) => {
          if (message.type() === 'error') problems.push(`console: ${message.text()} (${message.location().url})`)
        })
      }
      watchPage(page)
      context.on('page', watchPage)
      await use(problems)
      expect(problems, 'errors and requests that a journey must not leave behind').toEqual([])
    },
    { auto: true },
  ],
  workbench: async ({ page }, use) => {
    const workbench = new Workbench(page)
    await workbench.open()
    await use(workbench)
  },
})

/** Runs something in the light and in the dark theme, and proves that the page really has changed its paper. */
export async function inBothThemes(workbench: Workbench, look: (theme: Theme) => Promise<void>): Promise<void> {
  for (const theme of ['light', 'dark'] as const) {
    await workbench.chooseTheme(theme)
    const lightness = await paperLightness(workbench.page)
    if (theme === 'light') expect(lightness, 'lightness of the light paper').toBeGreaterThan(0.7)
    else expect(lightness, 'lightness of the dark paper').toBeLessThan(0.3)
    await look(theme)
  }
}

/** Mean of the three channels of the page's background, 0 to 1. */
function paperLightness(page: Page): Promise<number> {
  return page.evaluate(() => {
    const sources = [document.body, document.documentElement].map((node) => getComputedStyle(node).backgroundColor)
    const painted = sources.find((colour) => colour !== 'rgba(0, 0, 0, 0)') ?? 'rgb(255, 255, 255)'
    const context = document.createElement('canvas').getContext('2d')
    if (!context) throw new Error('the browser has no canvas')
    context.fillStyle = painted
    context.fillRect(0, 0, 1, 1)
    const [red, green, blue] = context.getImageData(0, 0, 1, 1).data
    return (red + green + blue) / (3 * 255)
  })
}

/** axe finds no violation in either theme. */
export async function expectAccessible(workbench: Workbench): Promise<void> {
  await inBothThemes(workbench, async (theme) => {
    const { violations } = await new AxeBuilder({ page: workbench.page }).analyze()
    const found = violations.flatMap(({ id, help, nodes }) =>
      nodes.map(({ target, failureSummary }) => `${id} (${help}) at ${target.join(' ')}: ${failureSummary}`),
    )
    expect(found, `axe in the ${theme} theme`).toEqual([])
  })
}

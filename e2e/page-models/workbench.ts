import { expect, type Locator, type Page } from '@playwright/test'

export type Theme = 'light' | 'dark'

/**
 * The page as a user meets it. Methods are what a user does, locators go by role and name, so that a journey reads as a
 * story and also proves that the names are there for a screen reader.
 */
export class Workbench {
  readonly page: Page

  constructor(page: Page) {
    this.page = page
  }

  /** Opens the page as on a first visit, and waits until its name stands there. */
  async open(): Promise<void> {
    await this.page.goto('./')
    await expect(this.heading()).toBeVisible()
  }

  /** The page's name in the header. */
  heading(): Locator {
    return this.page.getByRole('heading', { level: 1 })
  }

  /** Presses the header's button until the page is in this theme. */
  async chooseTheme(theme: Theme): Promise<void> {
    const button = this.page.getByRole('button', { name: /^Theme: / })
    const wanted = this.page.getByRole('button', { name: `Theme: ${theme}` })
    if (!(await wanted.isVisible())) await button.click()
    await expect(wanted).toBeVisible()
  }
}

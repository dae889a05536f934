import { expect, type Locator, type Page } from '@playwright/test'

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
}

/** What is read off the page for paper is drawn in the colours of the light theme, which is put on for the moment: nothing is painted in between. */
export function inLightTheme<T>(read: () => T): T {
  const { dataset } = document.documentElement
  const { theme } = dataset
  dataset.theme = 'light'
  try {
    return read()
  } finally {
    if (theme === undefined) delete dataset.theme
    else dataset.theme = theme
  }
}

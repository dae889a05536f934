/** What a picture may not hold if its page is to have no script and to ask for nothing from outside. */
const REFUSED: readonly (readonly [RegExp, string])[] = [
  [/<\s*(?:script|foreignObject|iframe|object|embed|audio|video|animate|set)\b/i, 'elements that act'],
  [/<!/, 'comments, declarations or marked sections'],
  [/<\?/, 'processing instructions'],
  [/\son[a-z]+\s*=/i, 'event handlers'],
  [/\s(?:xlink:)?href\s*=\s*(?!["']#)/i, 'references to the outside'],
  [/\ssrc\s*=/i, 'references to the outside'],
  [/url\(\s*(?!["']?#)/i, 'references to the outside'],
  [/\sstyle\s*=\s*["'][^"']*(?:@import|image\()/i, 'references to the outside'],
]

/**
 * An SVG file's text as an element inside an HTML page: without prologue, comments and style sheets (which would hold for the whole page),
 * every id and every reference to one under a prefix, so that several figures stand on one page.
 *
 * @param svg     one svg element, attributes in double quotes, as `figureToSvg` writes it.
 * @param prefix  letters, digits and hyphens.
 * @throws RangeError for text that is no svg element, or one that holds scripts or refers to anything outside itself.
 */
export function inlineSvg(svg: string, prefix: string): string {
  const element = svg
    .replace(/^\s*<\?xml[^>]*\?>/, '')
    .replace(/^\s*<!DOCTYPE[^>[]*>/i, '')
    .replace(/<!--[\s\S]*?-->/g, '')
    .replace(/<style\b[^>]*>[\s\S]*?<\/style\s*>/gi, '')
    .replace(/<style\b[^>]*\/>/gi, '')
    .trim()
  if (!/^<svg[\s>]/.test(element) || !element.endsWith('</svg>'))
    throw new RangeError(`a figure must be one svg element, began with ${JSON.stringify(svg.trim().slice(0, 20))}`)
  for (const [pattern, what] of REFUSED) {
    const found = element.match(pattern)
    if (found) throw new RangeError(`a figure must hold no ${what}, had ${JSON.stringify(found[0].trim())}`)
  }
  return element
    .replace(/ id="([^"]*)"/g, ` id="${prefix}$1"`)
    .replace(/url\((["']?)#([^")']*)\1\)/g, `url(#${prefix}$2)`)
    .replace(/((?:xlink:)?href)="#([^"]*)"/g, `$1="#${prefix}$2"`)
    .replace(/ aria-(labelledby|describedby)="([^"]*)"/g, (_, name: string, ids: string) => {
      const own = ids
        .split(/\s+/)
        .filter(Boolean)
        .map((id) => prefix + id)
      return ` aria-${name}="${own.join(' ')}"`
    })
}

/**
 * Checks that imports in `src` point upstream only, and that the pure rooms stay pure.
 *
 *   node .ci/import-direction.mjs [project folder]
 *
 * The table below is the rule. Sources are parsed, so that comments and strings never count: static and dynamic
 * imports, re-exports, `import('…')` types and `new URL('…', import.meta.url)` (workers) are all followed.
 */
import { readdirSync, readFileSync, statSync } from 'node:fs'
import { dirname, join, posix, relative, sep } from 'node:path'
import { fileURLToPath } from 'node:url'
import { parseSync } from 'vite'
import { isMain } from './is-main.mjs'

/**
 * Rooms in upstream order. `rooms`: whose code may be imported; `types`: whose types may be (`import type`);
 * `packages`: npm packages (an entry covers its subpaths; `@scope/*` covers a scope).
 *
 * @typedef {{ rooms: string[], types?: string[], packages: string[], pure?: boolean }} Room
 * @type {Record<string, Room>}
 */
export const ROOMS = {
  filter: { rooms: [], packages: ['fft.js'], pure: true },
  erp: { rooms: ['filter'], packages: [], pure: true },
  evidence: { rooms: ['erp', 'filter'], packages: [], pure: true },
  words: { rooms: ['evidence', 'erp', 'filter'], packages: [], pure: true },
  files: { rooms: ['erp', 'filter'], packages: ['papaparse', 'fflate', 'valibot'] },
  jobs: { rooms: ['filter', 'erp', 'evidence', 'words', 'files'], packages: ['comlink'] },
  state: {
    rooms: ['filter', 'erp', 'evidence', 'words', 'files', 'jobs'],
    packages: ['zustand', 'zundo', 'valibot', 'idb-keyval', 'fflate', 'comlink'],
  },
  plot: { rooms: [], packages: ['d3', 'react'] },
  page: {
    rooms: ['state', 'words', 'plot'],
    types: ['filter', 'erp', 'evidence', 'files', 'jobs'],
    packages: ['react', 'react-dom', 'react-aria-components', 'zustand', '@fontsource/*'],
  },
  'main.tsx': { rooms: ['page', 'state'], packages: ['react', 'react-dom', '@fontsource/*'] },
}

/** Packages that exactly one file wraps. */
const WRAPPERS = { 'fft.js': 'filter/fourier.ts' }

/** The part of d3 that takes hold of the DOM. It stays in plain files behind create(node, options); React draws. */
const D3_BEHAVIOUR = /^(select|selectAll|selection|drag\w*|zoom\w*|brush\w*|transition|axis[A-Z]\w*)$/

/** What a pure room may not reach for: its results depend on its arguments alone. */
const IMPURE = new Set(['Math.random', 'Date.now', 'performance.now'])

/**
 * @typedef {{ file: string, line: number, message: string }} Problem
 * @typedef {{ request: string, start: number, typeOnly: boolean, names: string[] }} Import
 */

/**
 * The problems of one source file.
 *
 * @param {string} file    path below `src`, with forward slashes: `erp/score.ts`
 * @param {string} source  its text
 * @returns {{ imports: number, problems: Problem[] }}
 */
export function checkFile(file, source) {
  const own = roomOf(file)
  const room = ROOMS[own]
  if (!room) {
    if (/\.d\.ts$/.test(file) && !file.includes('/')) return { imports: 0, problems: [] }
    return {
      imports: 0,
      problems: [{ file, line: 1, message: `"${own}" is not a room: the rooms are ${names(ROOMS)}` }],
    }
  }
  const parsed = parseSync(file, source)
  const at = (offset) => source.slice(0, offset).split('\n').length
  if (parsed.errors.length > 0) {
    return { imports: 0, problems: [{ file, line: 1, message: `cannot be parsed: ${parsed.errors[0].message}` }] }
  }
  const { imports, impure } = readImports(parsed)
  const problems = []
  for (const found of imports) {
    const message = judge(file, own, room, found)
    if (message) problems.push({ file, line: at(found.start), message })
  }
  if (room.pure) {
    for (const { name, start } of impure) {
      problems.push({ file, line: at(start), message: `${own} is pure and may not use ${name}` })
    }
  }
  return { imports: imports.length, problems }
}

/** What is wrong with one import, in words, or undefined. */
function judge(file, own, room, { request, typeOnly, names: imported }) {
  const path = request.replace(/\?.*$/, '')
  if (path.startsWith('.')) {
    const target = posix.normalize(posix.join(posix.dirname(file), path))
    if (target.startsWith('..')) return `${own} may not import ${request}: it lies outside src`
    const other = roomOf(target)
    if (other === own) {
      return target === `${own}/index.ts` ? `${own} imports its own index: import from the file itself` : undefined
    }
    if (!ROOMS[other]) return `${request} is in no room`
    if (room.rooms.includes(other)) return undefined
    if (room.types?.includes(other)) {
      return typeOnly ? undefined : `${own} may import only types from ${other} (import type), not ${request}`
    }
    return `${own} may not import from ${other} (${request}): ${upstream(own, room)}`
  }
  const allowed = room.packages.some((entry) =>
    entry.endsWith('/*') ? path.startsWith(entry.slice(0, -1)) : path === entry || path.startsWith(`${entry}/`),
  )
  if (!allowed) return `${own} may not import the package ${path}: allowed are ${room.packages.join(', ') || 'none'}`
  const wrapper = WRAPPERS[path]
  if (wrapper && wrapper !== file) return `only src/${wrapper} may import ${path}: import the wrapper`
  if (path === 'd3' && file.endsWith('.tsx')) {
    const behaviour = imported.find((name) => name === '*' || D3_BEHAVIOUR.test(name))
    if (behaviour) return `a component may not import ${behaviour} from d3: behaviours live in plain files of plot`
  }
  return undefined
}

/** Imports in every form, and uses of impure names. */
function readImports({ program, module }) {
  /** @type {Import[]} */
  const imports = []
  const impure = []
  for (const { moduleRequest, entries } of module.staticImports) {
    imports.push({
      request: moduleRequest.value,
      start: moduleRequest.start,
      typeOnly: entries.length > 0 && entries.every((entry) => entry.isType),
      names: entries.map(
        ({ importName }) => importName.name ?? (importName.kind === 'NamespaceObject' ? '*' : 'default'),
      ),
    })
  }
  for (const { entries } of module.staticExports) {
    for (const { moduleRequest, isType, importName } of entries) {
      if (!moduleRequest) continue
      const name = importName.name ?? '*'
      imports.push({ request: moduleRequest.value, start: moduleRequest.start, typeOnly: isType, names: [name] })
    }
  }
  walk(program, (node) => {
    if (node.type === 'ImportExpression' && node.source.type === 'Literal') {
      imports.push({ request: node.source.value, start: node.source.start, typeOnly: false, names: ['*'] })
    } else if (node.type === 'TSImportType') {
      imports.push({ request: node.source.value, start: node.start, typeOnly: true, names: [] })
    } else if (node.type === 'NewExpression' && node.callee.name === 'URL' && isOwnUrl(node.arguments[1])) {
      const [first] = node.arguments
      if (first.type === 'Literal' && /\.[cm]?[jt]sx?$/.test(first.value)) {
        imports.push({ request: first.value, start: first.start, typeOnly: false, names: [] })
      }
    } else if (node.type === 'MemberExpression' && node.object.type === 'Identifier') {
      const name = `${node.object.name}.${node.property.name}`
      if (IMPURE.has(name)) impure.push({ name, start: node.start })
    } else if (node.type === 'NewExpression' && node.callee.name === 'Date' && node.arguments.length === 0) {
      impure.push({ name: 'new Date()', start: node.start })
    }
  })
  return { imports, impure }
}

/** Is this the expression `import.meta.url`? */
function isOwnUrl(node) {
  return node?.type === 'MemberExpression' && node.object.type === 'MetaProperty' && node.property.name === 'url'
}

function walk(node, visit) {
  if (Array.isArray(node)) {
    for (const child of node) walk(child, visit)
  } else if (node && typeof node === 'object') {
    if (typeof node.type === 'string') visit(node)
    for (const key in node) walk(node[key], visit)
  }
}

const names = (table) => Object.keys(table).join(', ')
const roomOf = (path) => path.split('/')[0]
const upstream = (own, room) =>
  room.rooms.length > 0 ? `${own} imports ${room.rooms.join(', ')}` : `${own} imports no other room`

/**
 * Every source file below `<root>/src`.
 *
 * @param {string} root  project folder
 * @returns {{ files: number, imports: number, problems: Problem[] }}
 */
export function checkProject(root) {
  const src = join(root, 'src')
  let imports = 0
  /** @type {Problem[]} */
  const problems = []
  const files = readdirSync(src, { recursive: true })
    .map((path) => String(path))
    .filter((path) => /\.[cm]?[jt]sx?$/.test(path) && statSync(join(src, path)).isFile())
    .sort()
  for (const path of files) {
    const found = checkFile(path.split(sep).join('/'), readFileSync(join(src, path), 'utf8'))
    imports += found.imports
    problems.push(...found.problems)
  }
  return { files: files.length, imports, problems }
}

if (isMain(import.meta.url)) {
  const root = process.argv[2] ?? dirname(dirname(fileURLToPath(import.meta.url)))
  const { files, imports, problems } = checkProject(root)
  for (const { file, line, message } of problems) {
    console.log(`${relative(process.cwd(), join(root, 'src', file))}:${line}  ${message}`)
  }
  console.log(`${files} files, ${imports} imports, ${problems.length} against the direction`)
  if (files === 0) console.log('no source file was found')
  process.exitCode = problems.length > 0 || files === 0 ? 1 : 0
}

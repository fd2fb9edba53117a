import { existsSync, readdirSync, readFileSync } from 'node:fs'
import { dirname, join, posix, relative, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import ts from 'typescript'

export const root = resolve(dirname(fileURLToPath(import.meta.url)), '../..')

/** What git ignores, and what is data rather than source. */
const skipped = new Set(['node_modules', '.git', '.nuxt', '.output', '.data', 'coverage', '__pycache__'])

const walk = (folder: string): string[] =>
  readdirSync(join(root, folder), { withFileTypes: true }).flatMap((entry) => {
    if (skipped.has(entry.name)) return []
    const path = posix.join(folder, entry.name)
    return entry.isDirectory() ? walk(path) : [path]
  })

/** Every file of the repository below a folder, as paths from the root. */
export const filesBelow = (folder: string): string[] => (existsSync(join(root, folder)) ? walk(folder).sort() : [])

export const read = (path: string): string => readFileSync(join(root, path), 'utf8')

export const isCode = (path: string): boolean => /\.(ts|mts|mjs|vue)$/.test(path) && !path.endsWith('.d.mts')

const scriptsOf = (path: string): string => {
  const text = read(path)
  if (!path.endsWith('.vue')) return text
  return [...text.matchAll(/<script\b[^>]*>([\s\S]*?)<\/script>/g)].map((match) => match[1]).join('\n')
}

export interface ImportEdge {
  from: string
  /** As written. */
  specifier: string
  /** Path from the root when the import stays inside the repository, else null. */
  to: string | null
  /** Only types cross this edge: it is gone when the code runs. */
  typeOnly: boolean
}

const isTypeOnly = (node: ts.ImportDeclaration | ts.ExportDeclaration): boolean => {
  if (ts.isExportDeclaration(node)) return node.isTypeOnly
  const clause = node.importClause
  if (!clause) return false
  if (clause.isTypeOnly) return true
  const bindings = clause.namedBindings
  return (
    !clause.name &&
    bindings !== undefined &&
    ts.isNamedImports(bindings) &&
    bindings.elements.length > 0 &&
    bindings.elements.every((element) => element.isTypeOnly)
  )
}

const aliases: [prefix: string, folder: string][] = [
  ['#shared/', 'shared/'],
  ['#engine/', 'shared/engine/'],
  ['~~/', ''],
  ['@@/', ''],
  ['~/', 'app/'],
  ['@/', 'app/'],
]

const resolveInside = (from: string, specifier: string): string | null => {
  if (specifier.startsWith('.')) {
    const target = relative(root, resolve(root, dirname(from), specifier))
      .split('\\')
      .join('/')
    return target.replace(/\?.*$/, '')
  }
  const alias = aliases.find(([prefix]) => specifier.startsWith(prefix))
  return alias ? alias[1] + specifier.slice(alias[0].length).replace(/\?.*$/, '') : null
}

/** Every static, dynamic and re-exporting import of a file. */
export const importsOf = (from: string): ImportEdge[] => {
  const source = ts.createSourceFile(from, scriptsOf(from), ts.ScriptTarget.Latest, true, ts.ScriptKind.TS)
  const edges: ImportEdge[] = []
  const add = (specifier: string, typeOnly: boolean) =>
    edges.push({ from, specifier, to: resolveInside(from, specifier), typeOnly })
  const visit = (node: ts.Node): void => {
    if ((ts.isImportDeclaration(node) || ts.isExportDeclaration(node)) && node.moduleSpecifier) {
      if (ts.isStringLiteral(node.moduleSpecifier)) add(node.moduleSpecifier.text, isTypeOnly(node))
    } else if (ts.isImportTypeNode(node) && ts.isLiteralTypeNode(node.argument)) {
      if (ts.isStringLiteral(node.argument.literal)) add(node.argument.literal.text, true)
    } else if (ts.isCallExpression(node) && node.expression.kind === ts.SyntaxKind.ImportKeyword) {
      const [argument] = node.arguments
      if (argument && ts.isStringLiteralLike(argument)) add(argument.text, false)
    }
    ts.forEachChild(node, visit)
  }
  visit(source)
  return edges
}

const sourceRooms = ['app', 'server', 'shared', 'workers', 'scripts', 'tests'] as const

/** All import edges of all rooms, read once a run. */
export const allImports = (): ImportEdge[] =>
  sourceRooms.flatMap((room) => filesBelow(room).filter(isCode).flatMap(importsOf))

/** Name of the npm package that a specifier means, or null for built-in modules, aliases and paths. */
export const packageOf = (specifier: string): string | null => {
  if (/^(\.|\/|~|#|@\/|@@\/|node:|virtual:)/.test(specifier)) return null
  const [scope = '', name] = specifier.split('/')
  return scope.startsWith('@') ? `${scope}/${name}` : scope
}

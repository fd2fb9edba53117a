import { mkdirSync } from 'node:fs'
import { pathToFileURL } from 'node:url'
import { inCache, inProject } from './paths.mjs'

/**
 * Compiles one TypeScript module of the product and imports it: Node 20 runs no TypeScript. Packages stay outside, so
 * that the scripts and the product share one copy of each.
 * @param {string} entry path inside the checkout
 * @param {string} name name of the compiled file
 */
export const importCompiled = async (entry, name) => {
  // Imported here and not at the top: the scripts start before anything is installed.
  const { build } = await import('esbuild')
  const outfile = inCache(`${name}.mjs`)
  mkdirSync(inCache(), { recursive: true })
  await build({
    entryPoints: [inProject(entry)],
    outfile,
    bundle: true,
    packages: 'external',
    platform: 'node',
    format: 'esm',
    target: 'node20',
    alias: { '#engine': inProject('shared/engine'), '#shared': inProject('shared') },
    logLevel: 'warning',
  })
  return import(pathToFileURL(outfile).href)
}

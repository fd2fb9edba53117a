import { existsSync, readdirSync } from 'node:fs'
import { join } from 'node:path'
import { build } from 'esbuild'

/**
 * Compiles every entry of workers/ to one self-contained .mjs. piscina stays external: its move() marks results with
 * a private symbol, which a bundled copy would not share with the pool.
 * @param {{ root: string, outdir: string }} options
 */
export const bundleWorkers = async ({ root, outdir }) => {
  const folder = join(root, 'workers')
  const entries = existsSync(folder)
    ? readdirSync(folder).filter((name) => name.endsWith('.ts') && !name.endsWith('.d.ts'))
    : []
  if (entries.length === 0) return
  await build({
    entryPoints: entries.map((name) => join(folder, name)),
    outdir,
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    outExtension: { '.js': '.mjs' },
    external: ['pg-native', 'piscina'],
    alias: { '#engine': join(root, 'shared/engine') },
    banner: {
      js: "import { createRequire as __createRequire } from 'node:module'; const require = __createRequire(import.meta.url);",
    },
    logLevel: 'warning',
  })
}

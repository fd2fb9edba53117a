import { existsSync, readdirSync } from 'node:fs'
import { join } from 'node:path'
import { build } from 'esbuild'

/**
 * Compiles every thread entry of workers/, and the process that works the queue (`queue.mjs`), each to one file. piscina
 * stays external: its move() marks results with a private symbol, which a bundled copy would not share with the pool.
 * @param {{ root: string, outdir: string }} options
 */
export const bundleWorkers = async ({ root, outdir }) => {
  const folder = join(root, 'workers')
  const names = existsSync(folder)
    ? readdirSync(folder).filter((name) => name.endsWith('.ts') && !name.endsWith('.d.ts'))
    : []
  await build({
    entryPoints: {
      ...Object.fromEntries(names.map((name) => [name.slice(0, -3), join(folder, name)])),
      queue: join(root, 'server/jobs/worker-process.ts'),
    },
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

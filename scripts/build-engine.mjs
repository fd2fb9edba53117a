import { existsSync, readdirSync, statSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'
import { ensureKernel } from './build-kernel.mjs'

/** Bundles the engine's command line into one file, so that it runs without a TypeScript loader. `npm ci` does it once. */
const root = join(dirname(fileURLToPath(import.meta.url)), '..')
export const bundlePath = join(root, '.kernel/engine.mjs')

const newestBelow = (path) => {
  const found = statSync(path)
  if (!found.isDirectory()) return found.mtimeMs
  return Math.max(0, ...readdirSync(path).map((name) => newestBelow(join(path, name))))
}

const isCurrent = () =>
  existsSync(bundlePath) &&
  ['shared', 'scripts/engine', 'package-lock.json']
    .map((name) => newestBelow(join(root, name)))
    .every((time) => time < statSync(bundlePath).mtimeMs)

/** Bundles when a source is newer than the bundle. */
export const ensureEngine = async () => {
  if (isCurrent()) return
  await ensureKernel()
  const { build } = await import('esbuild')
  await build({
    entryPoints: [join(root, 'scripts/engine/main.ts')],
    outfile: bundlePath,
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    // Packages in CommonJS reach for require.
    banner: {
      js: "import { createRequire as __createRequire } from 'node:module'; const require = __createRequire(import.meta.url);",
    },
    logLevel: 'warning',
  })
}

if (process.argv[1] === fileURLToPath(import.meta.url)) await ensureEngine()

import { createHash } from 'node:crypto'
import { existsSync } from 'node:fs'
import { mkdir, readFile, rename, writeFile } from 'node:fs/promises'
import { dirname, join } from 'node:path'
import { fileURLToPath } from 'node:url'

/**
 * Compiles the map kernel (AssemblyScript) to WebAssembly and wraps it as a TypeScript module, so that page, web worker,
 * Node thread and test load it in the same way, without a request. `npm ci` runs this through `prepare`.
 */
const root = join(dirname(fileURLToPath(import.meta.url)), '..')
const source = join(root, 'shared/engine/kernel/map-kernel.as')
const target = join(root, '.kernel/map-kernel.ts')
const options = ['--optimizeLevel', '3', '--runtime', 'stub', '--enable', 'simd', '--noAssert']

/**
 * @param {string} text
 * @returns {Promise<Uint8Array>}
 */
const compile = async (text) => {
  const asc = await import('assemblyscript/asc')
  /** @type {Uint8Array | undefined} */
  let binary
  const { error, stderr } = await asc.main(['map-kernel.ts', '--outFile', 'map-kernel.wasm', ...options], {
    readFile: (name) => (name === 'map-kernel.ts' ? text : null),
    writeFile: (name, contents) => {
      if (name === 'map-kernel.wasm') binary = /** @type {Uint8Array} */ (contents)
    },
    listFiles: () => [],
  })
  if (error || !binary) throw new Error(`The map kernel does not compile:\n${stderr.toString()}`, { cause: error })
  return binary
}

/** Compiles only when the source, the options or the compiler changed; milliseconds otherwise. */
export const ensureKernel = async () => {
  const text = await readFile(source, 'utf8')
  const { version } = JSON.parse(await readFile(join(root, 'node_modules/assemblyscript/package.json'), 'utf8'))
  const stamp = createHash('sha256')
    .update(JSON.stringify([text, options, version]))
    .digest('hex')
  if (existsSync(target) && (await readFile(target, 'utf8')).includes(stamp)) return
  const lines =
    Buffer.from(await compile(text))
      .toString('base64')
      .match(/.{1,110}/g) ?? []
  const module = [
    `/* Compiled from shared/engine/kernel/map-kernel.as by scripts/build-kernel.mjs. Source ${stamp}. */`,
    'export const mapKernelBase64 = [',
    ...lines.map((line) => `  '${line}',`),
    "].join('')",
    '',
  ].join('\n')
  await mkdir(dirname(target), { recursive: true })
  // A reader never sees half a module.
  await writeFile(`${target}.${process.pid}`, module)
  await rename(`${target}.${process.pid}`, target)
}

if (process.argv[1] === fileURLToPath(import.meta.url)) await ensureKernel()

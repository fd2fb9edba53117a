import { relative, resolve } from 'node:path'
import { cp, mkdir } from 'node:fs/promises'
import { defineNuxtModule } from '@nuxt/kit'
import { bundleWorkers } from './bundle-workers.mjs'

/**
 * Puts what the server needs beside its entry: the compiled thread entries (`workers/*.mjs`) and the migrations.
 * Node 20 cannot run TypeScript, so the threads must be compiled before the pool starts them.
 */
export default defineNuxtModule({
  meta: { name: 'server-extras' },
  setup(_options, nuxt) {
    const root = nuxt.options.rootDir
    // The types of the routes would pull the server's modules into the page's program, where its globals are not those
    // of the server. The page knows the answers by app/types/api.ts. The framework adds the reference late, so this
    // takes it out later still.
    nuxt.hook('ready', () => {
      nuxt.hook('prepare:types', ({ references }) => {
        const at = references.findIndex((entry) => 'path' in entry && /\/nitro\.d\.ts$/.test(entry.path))
        if (at >= 0) references.splice(at, 1)
      })
    })
    nuxt.hook('nitro:init', (nitro) => {
      let pending = Promise.resolve()
      const emit = () => {
        const target = nuxt.options.dev ? resolve(root, '.nuxt/dev') : nitro.options.output.serverDir
        pending = pending
          .catch(() => undefined)
          .then(async () => {
            await bundleWorkers({ root, outdir: resolve(target, 'workers') })
            await mkdir(resolve(target, 'drizzle'), { recursive: true })
            await cp(resolve(root, 'drizzle'), resolve(target, 'drizzle'), { recursive: true })
          })
        return pending
      }
      if (!nuxt.options.dev) {
        nitro.hooks.hook('compiled', emit)
        return
      }
      nitro.hooks.hook('rollup:before', emit)
      nuxt.hook('builder:watch', async (_event, path) => {
        if (!/^(workers|shared)\//.test(relative(root, resolve(root, path)))) return
        await emit()
        await nitro.hooks.callHook('rollup:reload')
      })
    })
  },
})

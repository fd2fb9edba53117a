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

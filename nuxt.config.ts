import { fileURLToPath } from 'node:url'
import Icons from 'unplugin-icons/vite'
import { zodWithoutEval } from './scripts/zod-without-eval'

const here = (path: string) => fileURLToPath(new URL(path, import.meta.url))

export default defineNuxtConfig({
  compatibilityDate: '2026-11-01',
  // Everything behind the shell is private to a group, so no page is rendered with data on the server: nothing private can
  // end up in HTML, in a payload or in a cache, and there is one way to fetch (the API). See DEVELOPERS.md, decisions.
  ssr: false,
  telemetry: false,
  devtools: { enabled: false },
  modules: [
    '@pinia/nuxt',
    '@nuxtjs/tailwindcss',
    '@nuxtjs/color-mode',
    'nuxt-auth-utils',
    '@nuxt/eslint',
    './scripts/nuxt-server-extras.ts',
  ],
  css: ['~/assets/css/main.css'],
  colorMode: { classSuffix: '', preference: 'system', fallback: 'light', storageKey: 'linewright-color-mode' },
  tailwindcss: { viewer: false, cssPath: '~/assets/css/main.css' },
  app: {
    head: {
      htmlAttrs: { lang: 'en' },
      title: 'Linewright',
      meta: [{ name: 'viewport', content: 'width=device-width, initial-scale=1' }],
      // The policy forbids code made from text. zod tries it once, when the first schema is made, unless told before; in
      // the bundle no import is certain to come before every schema, so it is told here. Workers import zod-jitless.
      script: [{ innerHTML: 'globalThis.__zod_globalConfig={jitless:true}', tagPosition: 'head' }],
    },
  },
  imports: { scan: true },
  components: [{ path: '~/components', pathPrefix: false }],
  // The page keeps its own session store over GET /api/session; the module's endpoint is not built at all (see hooks).
  // OWASP's cost for scrypt. A hash holds 128 * N * r = 128 MiB while it runs, hence the raised ceiling.
  auth: {
    loadStrategy: 'none',
    hash: { scrypt: { cost: 131072, blockSize: 8, parallelization: 1, maxMemory: 160 * 1024 * 1024 } },
  },
  runtimeConfig: {
    databaseUrl: '',
    /** Base address for links; never taken from the Host header. */
    baseUrl: 'http://127.0.0.1:3000',
    storageDir: '.data/files',
    /** `inline`: this process also works the queue; `none`: only `npm run worker` processes do. */
    queue: 'inline',
    /** Proxies between the clients and this process whose X-Forwarded-For entries are trusted, counted from the right. */
    trustedProxies: 0,
    /** The session password before the present one; set it while changing secrets, so that nobody is signed out. */
    sessionPreviousPassword: '',
    /** Seconds after which a sealed cookie is refused whatever the database says: the absolute limit of a session. */
    session: {
      password: '',
      maxAge: 30 * 24 * 3600,
      sessionHeader: false,
      cookie: { secure: true, sameSite: 'lax', httpOnly: true, path: '/' },
    },
  },
  nitro: {
    errorHandler: '~~/server/error-handler.ts',
    typescript: { tsConfig: { include: ['../workers/**/*', '../server/**/*', '../shared/**/*'] } },
    sourceMap: false,
  },
  typescript: {
    strict: true,
    tsConfig: { compilerOptions: { noUncheckedIndexedAccess: true } },
    nodeTsConfig: { include: ['../scripts/**/*.ts', '../drizzle.config.ts', '../vitest.config.ts'] },
  },
  vite: {
    plugins: [Icons({ compiler: 'vue3', autoInstall: false }), zodWithoutEval()],
    worker: { format: 'es' },
    // In development the worker's script comes from Vite, past the middleware that sets the headers; the page demands this.
    server: { headers: { 'cross-origin-embedder-policy': 'require-corp' } },
  },
  hooks: {
    // Nuxt 4.4.5 asks the client's configuration for a server entry in development and stops where ssr is off and there is
    // none. Naming the entry that it would use (the empty shell) is all it wants.
    'vite:extendConfig': (config, { isClient }) => {
      const input = config.build?.rollupOptions?.input
      if (
        !isClient ||
        process.env.NODE_ENV === 'production' ||
        !input ||
        typeof input !== 'object' ||
        Array.isArray(input)
      )
        return
      input.server = here('./node_modules/nuxt/dist/app/entry-spa.js')
    },
    // nuxt-auth-utils brings GET and DELETE /api/_auth/session. Sessions have one entrance here: /api/session.
    'nitro:config': (config) => {
      config.handlers = config.handlers?.filter((handler) => handler?.route !== '/api/_auth/session')
    },
  },
  alias: { '#engine': here('./shared/engine') },
  experimental: { payloadExtraction: false },
})

import { fileURLToPath } from 'node:url'
import Icons from 'unplugin-icons/vite'

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
    },
  },
  imports: { scan: true },
  components: [{ path: '~/components', pathPrefix: false }],
  runtimeConfig: {
    databaseUrl: '',
    /** Base address for links; never taken from the Host header. */
    baseUrl: 'http://127.0.0.1:3000',
    storageDir: '.data/files',
    /** `inline`: this process also works the queue; `none`: only `npm run worker` processes do. */
    queue: 'inline',
    /** Proxies between the clients and this process whose X-Forwarded-For entries are trusted, counted from the right. */
    trustedProxies: 0,
    session: { name: 'linewright', password: '', sessionHeader: false, cookie: { secure: true, sameSite: 'lax' } },
  },
  nitro: {
    typescript: { tsConfig: { include: ['../workers/**/*', '../server/**/*', '../shared/**/*'] } },
    sourceMap: false,
  },
  typescript: {
    strict: true,
    tsConfig: { compilerOptions: { noUncheckedIndexedAccess: true } },
    nodeTsConfig: { include: ['../scripts/**/*.ts', '../drizzle.config.ts', '../vitest.config.ts'] },
  },
  vite: {
    plugins: [Icons({ compiler: 'vue3', autoInstall: false })],
    worker: { format: 'es' },
  },
  alias: { '#engine': here('./shared/engine') },
  experimental: { payloadExtraction: false },
})

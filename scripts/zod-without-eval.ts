import type { Plugin } from 'vite'

/**
 * Makes app/utils/zod-jitless.ts the first module of the page. zod looks for `new Function` when a schema is made, which
 * is while modules load, and a page whose policy forbids it would report a violation; a Nuxt plugin runs too late.
 */
export const zodWithoutEval = (): Plugin => ({
  name: 'zod-without-eval',
  enforce: 'pre',
  transform: (code, id) =>
    /\/nuxt\/dist\/app\/entry(?:\.async)?\.js(?:\?|$)/.test(id)
      ? { code: `import '~/utils/zod-jitless'\n${code}`, map: null }
      : null,
})

import { z } from 'zod'

// The content security policy forbids code made from text; without this zod would try it once and be reported. Imported
// first by the page's workers; the page itself is told in its head (nuxt.config.ts), before any module runs.
z.config({ jitless: true })

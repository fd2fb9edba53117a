import { pathToFileURL } from 'node:url'
import { bundlePath, ensureEngine } from './build-engine.mjs'

/** `npm run -s engine -- COMMAND`: the engine's command line; see scripts/engine/main.ts. */
await ensureEngine()
await import(pathToFileURL(bundlePath).href)

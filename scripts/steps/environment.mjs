import { keepSecret } from '../postgres/secrets.mjs'
import { inData } from './paths.mjs'

/**
 * What the local server runs with: secrets it made itself, files in the data folder, the loopback address. Anything the
 * caller set in the environment wins.
 */
export const localEnvironment = ({ DATABASE_URL, DATABASE_OWNER_URL }, { port }) => ({
  HOST: '127.0.0.1',
  PORT: String(port),
  DATABASE_URL,
  DATABASE_OWNER_URL,
  NUXT_BASE_URL: process.env.NUXT_BASE_URL ?? `http://127.0.0.1:${port}`,
  NUXT_STORAGE_DIR: process.env.NUXT_STORAGE_DIR ?? inData('files'),
  LOG_LEVEL: process.env.LOG_LEVEL ?? 'warn',
  NUXT_SESSION_PASSWORD: process.env.NUXT_SESSION_PASSWORD ?? keepSecret(inData('secrets', 'session-password')),
})

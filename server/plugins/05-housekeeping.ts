import { defineNitroPlugin } from 'nitropack/runtime'
import { removeStaleRows, warnOfPowerfulRole } from '../services/housekeeping.service'
import { logger } from '../utils/logger'
import { onShutdown } from '../utils/shutdown'

const hourMs = 3600 * 1000
const firstMs = 30 * 1000

/** Nothing waits for this and nothing breaks without it, so a failure is a line in the log. */
const attempt = (work: () => Promise<void>) => (): void => {
  work().catch((error: unknown) => logger.warn({ event: 'housekeeping.failed', err: error }))
}

export default defineNitroPlugin(() => {
  const first = setTimeout(() => {
    attempt(warnOfPowerfulRole)()
    attempt(removeStaleRows)()
  }, firstMs)
  const hourly = setInterval(attempt(removeStaleRows), hourMs)
  onShutdown('housekeeping', () => {
    clearTimeout(first)
    clearInterval(hourly)
  })
})

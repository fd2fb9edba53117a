import { defineNitroPlugin, useRuntimeConfig } from 'nitropack/runtime'
import { closeTablePool } from '../jobs/table-pool'
import { sweepFiles } from '../services/file-sweep.service'
import { useFileStore } from '../storage/current'
import { openFolderStore } from '../storage/folder-store'
import { logger } from '../utils/logger'
import { onShutdown } from '../utils/shutdown'

const firstSweepMs = 60_000
const sweepEveryMs = 60 * 60_000

const sweep = async () => {
  try {
    const swept = await sweepFiles()
    if (swept.forgotten + swept.orphans > 0) logger.info({ event: 'files.swept', ...swept })
  } catch (error) {
    logger.warn({ event: 'files.sweep-failed', reason: error instanceof Error ? error.message : String(error) })
  }
}

/** Chooses where files lie, keeps the place tidy, and ends the thread that reads them. */
export default defineNitroPlugin(() => {
  const directory = String(useRuntimeConfig().storageDir)
  if (directory === '') throw new Error('NUXT_STORAGE_DIR: expected a folder for uploaded files; found nothing')
  useFileStore(openFolderStore({ directory }))
  let every: NodeJS.Timeout | undefined
  const first = setTimeout(() => {
    void sweep()
    every = setInterval(() => void sweep(), sweepEveryMs)
    every.unref()
  }, firstSweepMs)
  first.unref()
  onShutdown('file sweep', () => {
    clearTimeout(first)
    clearInterval(every)
  })
  onShutdown('table thread', closeTablePool, 'close')
})

import { countAppliedMigrations } from '../database/repositories/health.repository'
import { getDatabase } from '../database/client'
import { countJournalMigrations } from '../database/journal'
import { isShuttingDown } from '../utils/shutdown'

export const isReady = async (): Promise<boolean> => {
  if (isShuttingDown()) return false
  const applied = await countAppliedMigrations(getDatabase())
  return applied === (await countJournalMigrations())
}

import { dirname, join } from 'node:path'
import { newDemoPassword, readDemoRecord, writeDemoRecord } from './accounts'
import { demoGroupName, demoPeople, type DemoPerson } from './scenario'

export interface DemoOptions {
  /** Address for the application role. */
  databaseUrl: string
  /** Folder of uploaded files; the record of the demo accounts lies beside it. */
  storageDir: string
}

export interface DemoAccount extends DemoPerson {
  password: string
}

export interface Demo {
  groupId: string
  groupName: string
  accounts: DemoAccount[]
  /** True when passwords were made in this call, so that they should be printed. */
  isNew: boolean
  /** File with the passwords, mode 600. */
  passwordFile: string
}

/**
 * Accounts, group, parameter sets, measurements and queued runs of the invented scenario, in a migrated database. Does
 * nothing where all of it was loaded before: what people changed or removed since then stays changed or removed. An
 * interrupted load is completed by the next one. The runs are computed by whoever works the queue.
 */
export const loadDemo = async ({ databaseUrl, storageDir }: DemoOptions): Promise<Demo> => {
  process.env.DATABASE_URL = databaseUrl
  // The modules below read the environment when they are first loaded; a script prints its own lines, not log lines.
  process.env.LOG_LEVEL ??= 'warn'
  const { ensureAccount, ensureGroup, fillGroup } = await import('./fill-group')
  const { closePool } = await import('../../server/database/client')
  const { startQueue, stopQueue } = await import('../../server/jobs/queue')
  const { closeTablePool } = await import('../../server/jobs/table-pool')
  const { useFileStore } = await import('../../server/storage/current')
  const { openFolderStore } = await import('../../server/storage/folder-store')

  const passwordFile = join(dirname(storageDir), 'demo-accounts.json')
  const record = await readDemoRecord(passwordFile)
  useFileStore(openFolderStore({ directory: storageDir }))
  let isNew = false
  try {
    const userIds = new Map<string, string>()
    for (const person of demoPeople) {
      const known = record.passwords[person.email]
      const password = known ?? newDemoPassword()
      if (known === undefined) {
        record.passwords[person.email] = password
        // Kept before it is used: a password that nobody knows would lock everybody out.
        await writeDemoRecord(passwordFile, record)
        isNew = true
      }
      userIds.set(person.email, await ensureAccount(person, password, known === undefined))
    }
    const groupId = await ensureGroup(userIds)
    if (record.filledGroupId !== groupId) {
      await startQueue()
      await fillGroup(groupId, userIds.get(demoPeople[0]?.email ?? '') ?? '')
      await writeDemoRecord(passwordFile, { ...record, filledGroupId: groupId })
    }
    const accounts = demoPeople.map((person) => ({ ...person, password: record.passwords[person.email] ?? '' }))
    return { groupId, groupName: demoGroupName, accounts, isNew, passwordFile }
  } finally {
    await stopQueue()
    await closeTablePool()
    await closePool()
  }
}

interface Cluster {
  folder: string
  data: string
  bin: string
  major: number
  port: number
}

interface DatabaseAddresses {
  /** Application role: not superuser, not owner, obeys row level security. */
  DATABASE_URL: string
  /** Owner of the database; for migrations only. */
  DATABASE_OWNER_URL: string
  created: boolean
  started: boolean
}

export declare const start: (options?: { unsafeFast?: boolean }) => Promise<Cluster & { started: boolean }>
export declare const stop: (options?: { onlyIfUnused?: boolean }) => boolean
export declare const status: () => Cluster | null
export declare const createDatabase: (name: string, options?: { unsafeFast?: boolean }) => Promise<DatabaseAddresses>
export declare const dropDatabase: (name: string) => Promise<void>
export declare const openDatabase: () => Promise<DatabaseAddresses>

import { createHash } from 'node:crypto'
import { existsSync, lstatSync, mkdirSync, readdirSync, readFileSync, realpathSync, symlinkSync } from 'node:fs'
import { dirname, join, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { requireServers } from './binaries.mjs'
import { canEnter, serverAccount } from './account.mjs'

export const projectRoot = resolve(dirname(fileURLToPath(import.meta.url)), '../..')
export const dataRoot = () => resolve(process.env.LINEWRIGHT_DATA ?? join(projectRoot, '.data'))

const versionIn = (folder) => {
  const file = join(folder, 'data', 'PG_VERSION')
  return existsSync(file) ? Number(readFileSync(file, 'utf8').trim()) : null
}

/** Clusters already in the data folder, newest major first. */
const existingClusters = () => {
  const root = dataRoot()
  if (!existsSync(root)) return []
  return readdirSync(root)
    .map((name) => ({ folder: join(root, name), major: Number(/^postgres-(\d+)$/.exec(name)?.[1] ?? Number.NaN) }))
    .filter(({ major }) => Number.isInteger(major))
    .sort((a, b) => b.major - a.major)
}

const wayOver = (folder, found, have) =>
  [
    `The data in ${folder} belongs to PostgreSQL ${found}; this machine offers PostgreSQL ${have}.`,
    'A server cannot open the files of another major version, so nothing there was touched. The way over:',
    `  1. install the old server beside the new one (Debian: postgresql-${found}) and write a dump with it:`,
    `     PG_BINDIR=/usr/lib/postgresql/${found}/bin node scripts/pg.mjs dump linewright.dump`,
    `  2. read it into a new cluster of PostgreSQL ${have}:`,
    '     PG_FRESH=1 node scripts/pg.mjs restore linewright.dump',
    '  3. keep the old folder until the new one has been looked at, then remove it.',
    'To begin with an empty database instead and leave the old data where it is: PG_FRESH=1 npm start',
  ].join('\n')

/**
 * Which server works on which folder: `{ folder, major, bin }`. The folder carries the server's major version; data of
 * another major version stops the start with the way over, unless its own server is on the machine too.
 */
export const choosePlace = () => {
  const servers = requireServers()
  const newest = servers[0]
  const serverOf = (major) => servers.find((server) => server.major === major)
  const given = process.env.PG_DIR
  if (given) {
    const found = versionIn(resolve(given))
    const server = found === null ? newest : serverOf(found)
    if (!server) throw new Error(wayOver(resolve(given), found, newest.major))
    return { folder: resolve(given), major: server.major, bin: server.folder }
  }
  const fresh = process.env.PG_FRESH === '1'
  const existing = existingClusters()
  for (const { folder, major } of existing) {
    const found = versionIn(folder) ?? major
    const server = serverOf(found)
    if (server && found === major && (!fresh || server === newest)) return { folder, major, bin: server.folder }
  }
  const other = existing[0]
  if (other && !fresh) throw new Error(wayOver(other.folder, versionIn(other.folder) ?? other.major, newest.major))
  return { folder: join(dataRoot(), `postgres-${newest.major}`), major: newest.major, bin: newest.folder }
}

/**
 * Makes the folder and answers its real path. A checkout below a home of mode 700 (root's, usually) cannot be entered by
 * the server account; then the folder lies under /var/lib/linewright and `.data/postgres-N` is a link to it.
 */
export const makeFolder = (folder) => {
  if (existsSync(folder)) return realpathSync(folder)
  const parent = dirname(folder)
  mkdirSync(parent, { recursive: true })
  if (lstatSync(folder, { throwIfNoEntry: false })) {
    throw new Error(`${folder} is a link to a folder that is gone; put the folder back or remove the link`)
  }
  if (!serverAccount() || canEnter(parent)) {
    mkdirSync(folder, { mode: 0o755 })
    return realpathSync(folder)
  }
  const name = createHash('sha256').update(folder).digest('hex').slice(0, 16)
  const target = join('/var/lib/linewright', name, folder.slice(parent.length + 1))
  mkdirSync(target, { recursive: true, mode: 0o755 })
  symlinkSync(target, folder)
  console.log(`The account ${serverAccount().name} cannot enter ${parent}, so the database lies in ${target}.`)
  return target
}

import { spawnSync } from 'node:child_process'
import {
  chmodSync,
  chownSync,
  existsSync,
  mkdirSync,
  readFileSync,
  realpathSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs'
import { join } from 'node:path'
import { setTimeout as pause } from 'node:timers/promises'
import { runAsServer, serverAccount } from './account.mjs'
import { clearAftermath } from './aftermath.mjs'
import { withLock } from './lock.mjs'
import { choosePlace, makeFolder } from './place.mjs'
import { freePort } from './port.mjs'
import { keepSecret } from './secrets.mjs'

export const superuser = 'linewright_cluster'

/** What was written to a log since it had `begun` bytes, its last lines. */
const lastLines = (file, begun) =>
  existsSync(file) ? readFileSync(file).subarray(begun).toString('utf8').trim().split('\n').slice(-8).join('\n') : ''

const own = (path, mode) => {
  const account = serverAccount()
  if (account) chownSync(path, account.uid, account.gid)
  chmodSync(path, mode)
}

/** Port of a running server, as it wrote it itself (fourth line of its pid file); null when none runs. */
const runningPort = ({ bin, data }) => {
  if (!existsSync(join(data, 'postmaster.pid'))) return null
  if (runAsServer(join(bin, 'pg_ctl'), ['status', '-D', data]).status !== 0) return null
  const port = Number(readFileSync(join(data, 'postmaster.pid'), 'utf8').split('\n')[3])
  return Number.isInteger(port) && port > 0 ? port : null
}

const passwordFile = (folder, role) => join(folder, 'secrets', role)

const initialise = ({ bin, folder, data }) => {
  console.log(`Making a private PostgreSQL cluster in ${folder}`)
  keepSecret(passwordFile(folder, superuser))
  mkdirSync(data, { recursive: true })
  own(data, 0o700)
  const account = serverAccount()
  // initdb reads the password as the server account, which must not own the folder of secrets.
  const handed = join(folder, 'initial-password')
  writeFileSync(handed, readFileSync(passwordFile(folder, superuser)), { mode: 0o600 })
  if (account) chownSync(handed, account.uid, account.gid)
  try {
    const made = runAsServer(join(bin, 'initdb'), [
      ...['-D', data, '-U', superuser, '-E', 'UTF8', '--locale=C.UTF-8'],
      ...['--auth=scram-sha-256', `--pwfile=${handed}`],
    ])
    if (made.status !== 0) throw new Error(`initdb could not make the cluster in ${data}:\n${made.stderr}`)
  } catch (error) {
    rmSync(data, { recursive: true, force: true })
    throw error
  } finally {
    rmSync(handed, { force: true })
  }
}

const launch = async ({ bin, folder, data }, { unsafeFast }) => {
  const log = join(folder, 'server.log')
  writeFileSync(log, '', { flag: 'a' })
  own(log, 0o640)
  const memory = join(folder, 'port')
  const remembered = existsSync(memory) ? Number(readFileSync(memory, 'utf8')) : undefined
  let complaint = ''
  let wanted = remembered
  const deadline = performance.now() + 20_000
  do {
    const port = await freePort(wanted)
    const settings = [`-p ${port}`, '-h 127.0.0.1', "-c unix_socket_directories=''", '-c max_connections=200']
    if (unsafeFast) settings.push('-c fsync=off', '-c synchronous_commit=off', '-c full_page_writes=off')
    const args = ['start', '-w', '-t', '60', '-s', '-D', data, '-l', log, '-o', settings.join(' ')]
    const begun = existsSync(log) ? statSync(log).size : 0
    const done = runAsServer(join(bin, 'pg_ctl'), args)
    if (done.status === 0) {
      writeFileSync(memory, `${port}\n`)
      return port
    }
    complaint = `${done.stderr}\n${lastLines(log, begun)}`
    // Between finding a free port and the server taking it, another process may have taken it: elsewhere, then.
    if (/address already in use|could not bind/i.test(complaint)) wanted = undefined
    // The children of a killed server need a moment to notice and to let go of its memory.
    else if (/shared memory block.*still in use|postmaster\.pid" already exists/i.test(complaint)) await pause(200)
    else break
  } while (performance.now() < deadline)
  throw new Error(`PostgreSQL did not start in ${folder}:\n${complaint}`)
}

// By its real path: the server account may be unable to follow the link in the checkout.
const place = () => {
  const { folder: named, bin, major } = choosePlace()
  const folder = existsSync(named) ? realpathSync(named) : named
  return { bin, major, folder, data: join(folder, 'data') }
}

/**
 * Starts the private server, makes its cluster first when there is none. Answers where it listens; `started` tells
 * whether this call started it. `unsafeFast` gives up durability: for throw-away clusters only.
 */
export const startCluster = async ({ unsafeFast = false } = {}) => {
  const chosen = place()
  const folder = makeFolder(chosen.folder)
  const here = { ...chosen, folder, data: join(folder, 'data') }
  return withLock(join(folder, 'start.lock'), {}, async () => {
    if (!existsSync(join(here.data, 'PG_VERSION'))) initialise(here)
    await clearAftermath(here.data)
    const running = runningPort(here)
    const port = running ?? (await launch(here, { unsafeFast }))
    return { ...here, port, started: running === null }
  })
}

/** The running server, or null. Never starts or makes anything. */
export const findCluster = () => {
  const chosen = place()
  const port = existsSync(chosen.data) ? runningPort(chosen) : null
  return port === null ? null : { ...chosen, port }
}

/** Stops the server after ending its connections; with `onlyIfUnused` leaves it to others that still work with it. */
export const stopCluster = ({ onlyIfUnused = false } = {}) => {
  const cluster = findCluster()
  if (!cluster) return false
  if (onlyIfUnused) {
    const others = query(
      cluster,
      'postgres',
      "select count(*) from pg_stat_activity where backend_type = 'client backend' and pid <> pg_backend_pid()",
    )
    if (others !== '0') return false
  }
  const done = runAsServer(join(cluster.bin, 'pg_ctl'), ['stop', '-w', '-s', '-m', 'fast', '-D', cluster.data])
  if (done.status !== 0) throw new Error(`PostgreSQL in ${cluster.folder} did not stop:\n${done.stderr}`)
  return true
}

/** Password of a role of this cluster, made at first use. */
export const passwordOf = (cluster, role) => keepSecret(passwordFile(cluster.folder, role))

/** Environment that lets the PostgreSQL client programs in as the cluster's superuser. */
export const clientEnvironment = (cluster, database) => ({
  ...process.env,
  PGHOST: '127.0.0.1',
  PGPORT: String(cluster.port),
  PGUSER: superuser,
  PGPASSWORD: passwordOf(cluster, superuser),
  PGDATABASE: database,
})

/** Runs SQL as superuser and answers its bare output. The text goes through stdin, so no password shows in a process list. */
export const query = (cluster, database, sql) => {
  const done = spawnSync(join(cluster.bin, 'psql'), ['-X', '-q', '-A', '-t', '-v', 'ON_ERROR_STOP=1'], {
    env: clientEnvironment(cluster, database),
    input: sql,
    encoding: 'utf8',
  })
  if (done.status !== 0) throw new Error(`PostgreSQL refused a statement in ${database}:\n${done.stderr?.trim()}`)
  return done.stdout.trim()
}

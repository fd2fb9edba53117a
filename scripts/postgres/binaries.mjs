import { spawnSync } from 'node:child_process'
import { existsSync, readdirSync } from 'node:fs'
import { join } from 'node:path'
import { installPackages } from '../debian.mjs'

const needed = ['initdb', 'pg_ctl', 'postgres', 'psql']
const isComplete = (folder) => needed.every((name) => existsSync(join(folder, name)))

const majorOf = (folder) => {
  const answer = spawnSync(join(folder, 'postgres'), ['--version'], { encoding: 'utf8' })
  const major = /\s(\d+)/.exec(answer.stdout ?? '')?.[1]
  if (!major) throw new Error(`${folder}/postgres does not tell its version; found "${(answer.stdout ?? '').trim()}"`)
  return Number(major)
}

/** Folders of server programs on this machine, newest major first. `PG_BINDIR` alone decides when it is set. */
export const findServers = () => {
  const chosen = process.env.PG_BINDIR
  if (chosen) {
    if (!isComplete(chosen)) throw new Error(`PG_BINDIR is ${chosen}; expected a folder holding ${needed.join(', ')}`)
    return [{ folder: chosen, major: majorOf(chosen) }]
  }
  const debian = '/usr/lib/postgresql'
  const folders = existsSync(debian) ? readdirSync(debian).map((name) => join(debian, name, 'bin')) : []
  // pg_config exists with the client library alone, so its answer is only a candidate.
  const configured = spawnSync('pg_config', ['--bindir'], { encoding: 'utf8' }).stdout?.trim()
  if (configured && !folders.includes(configured)) folders.push(configured)
  return folders
    .filter(isComplete)
    .map((folder) => ({ folder, major: majorOf(folder) }))
    .sort((a, b) => b.major - a.major)
}

/** The servers of this machine; installs Debian's when there is none. */
export const requireServers = () => {
  const found = findServers()
  if (found.length > 0) return found
  installPackages(['postgresql'], 'PostgreSQL')
  const installed = findServers()
  if (installed.length === 0)
    throw new Error('PostgreSQL was installed, but no server was found under /usr/lib/postgresql')
  return installed
}

import { spawnSync } from 'node:child_process'
import { readFileSync } from 'node:fs'

/**
 * The unprivileged account that runs the server: PostgreSQL refuses to run as root. Everyone else runs it as themselves.
 * @returns {{ uid: number, gid: number, name: string } | null} null when no change of account is needed
 */
export const serverAccount = () => {
  if (process.getuid?.() !== 0) return null
  const lines = readFileSync('/etc/passwd', 'utf8').split('\n')
  for (const name of ['postgres', 'nobody']) {
    const [, , uid, gid] = lines.find((line) => line.startsWith(`${name}:`))?.split(':') ?? []
    if (uid && gid) return { uid: Number(uid), gid: Number(gid), name }
  }
  throw new Error('neither the account postgres nor nobody is in /etc/passwd; PostgreSQL cannot run as root')
}

/**
 * Runs a server program to its end under that account. stdout is never a pipe: a server that inherits one keeps it open,
 * and the caller would wait for ever.
 */
export const runAsServer = (command, args, { env = {} } = {}) => {
  const account = serverAccount()
  const done = spawnSync(command, args, {
    cwd: '/',
    env: { ...process.env, LC_ALL: 'C.UTF-8', ...env },
    stdio: ['ignore', 'ignore', 'pipe'],
    encoding: 'utf8',
    ...(account ? { uid: account.uid, gid: account.gid } : {}),
  })
  if (done.error) throw done.error
  return { status: done.status, stderr: done.stderr?.trim() ?? '' }
}

/** True when the server account can walk into the folder (a home of mode 700 on the way would stop it). */
export const canEnter = (folder) => runAsServer('/usr/bin/test', ['-x', folder]).status === 0

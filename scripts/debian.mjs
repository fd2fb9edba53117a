import { spawnSync } from 'node:child_process'
import { existsSync } from 'node:fs'

const isRoot = () => process.getuid?.() === 0

/** True when a Debian package manager is there and may be used. */
export const canInstall = () => isRoot() && existsSync('/usr/bin/apt-get')

/**
 * Installs Debian packages, or throws with the command to type. Asked only for what is missing, so a machine that has
 * everything is never changed and needs no network.
 * @param {string[]} packages
 * @param {string} purpose what they are needed for, for the message
 */
export const installPackages = (packages, purpose) => {
  const command = `apt-get update && apt-get install -y --no-install-recommends ${packages.join(' ')}`
  if (!canInstall()) {
    throw new Error(`${purpose} needs the Debian packages ${packages.join(', ')}. Install them as root:\n  ${command}`)
  }
  console.log(`Installing ${packages.join(', ')} (${purpose}) ...`)
  const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' }
  const options = { env, stdio: ['ignore', 'ignore', 'inherit'], timeout: 15 * 60_000 }
  spawnSync('apt-get', ['update', '-q'], options)
  const done = spawnSync('apt-get', ['install', '-y', '-q', '--no-install-recommends', ...packages], options)
  if (done.status !== 0) throw new Error(`${purpose}: the installation failed. Install by hand:\n  ${command}`)
}

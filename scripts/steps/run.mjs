import { spawn } from 'node:child_process'
import { projectRoot } from './paths.mjs'

/**
 * Runs a program of this checkout to its end with its output in place; rejects when it fails.
 * @param {string} command
 * @param {string[]} args
 * @param {{ env?: Record<string, string>, quiet?: boolean }} [options]
 */
export const run = (command, args, { env = {}, quiet = false } = {}) =>
  new Promise((resolve, reject) => {
    const child = spawn(command, args, {
      cwd: projectRoot,
      env: { ...process.env, ...env },
      stdio: ['ignore', quiet ? 'ignore' : 'inherit', 'inherit'],
    })
    child.once('error', reject)
    child.once('exit', (code, signal) => {
      if (code === 0) resolve()
      else reject(new Error(`${command} ${args.join(' ')} ended with ${signal ?? `code ${code}`}`))
    })
  })

/** Path of a program that npm installed. */
export const installed = (name) => `node_modules/.bin/${name}`

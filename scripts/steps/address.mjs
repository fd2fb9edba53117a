import { existsSync, mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { setTimeout as pause } from 'node:timers/promises'
import { isFree } from '../postgres/port.mjs'
import { inData } from './paths.mjs'

const memory = () => inData('server.json')

/** True when a server answers its readiness address there. */
export const answersAt = async (baseUrl) => {
  try {
    const answer = await fetch(`${baseUrl}/api/health/ready`, { signal: AbortSignal.timeout(2000) })
    return answer.ok
  } catch {
    return false
  }
}

/** Address of the server that an earlier `npm start` of this checkout still runs; null when none does. */
export const findRunning = async () => {
  if (!existsSync(memory())) return null
  const { pid, baseUrl } = JSON.parse(readFileSync(memory(), 'utf8'))
  try {
    process.kill(pid, 0)
  } catch {
    return null
  }
  return (await answersAt(baseUrl)) ? baseUrl : null
}

export const rememberRunning = (baseUrl) => {
  mkdirSync(inData(), { recursive: true })
  writeFileSync(memory(), `${JSON.stringify({ pid: process.pid, baseUrl })}\n`)
}

export const forgetRunning = () => rmSync(memory(), { force: true })

/** The wanted port, or the next free one above it. */
export const choosePort = async (wanted) => {
  if (!Number.isInteger(wanted) || wanted < 1 || wanted > 65_535) {
    throw new Error(`PORT: expected a whole number from 1 to 65535; found "${process.env.PORT}"`)
  }
  for (let port = wanted; port < Math.min(wanted + 100, 65_536); port += 1) {
    if (await isFree(port)) return port
  }
  throw new Error(`no free port from ${wanted} to ${wanted + 99}`)
}

/** Waits until the server is ready; rejects when the process ends first or the time is over. */
export const waitUntilReady = async (baseUrl, ended, limitMs = 60_000) => {
  const deadline = performance.now() + limitMs
  let over = false
  void ended.then(() => (over = true))
  while (!over && performance.now() < deadline) {
    if (await answersAt(baseUrl)) return
    await pause(100)
  }
  throw new Error(
    over ? 'the server ended before it was ready' : `no answer from ${baseUrl} within ${limitMs / 1000} s`,
  )
}

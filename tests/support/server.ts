import { spawn, type ChildProcess } from 'node:child_process'
import { randomBytes } from 'node:crypto'
import { dirname, join, resolve } from 'node:path'
import { fileURLToPath } from 'node:url'
import { setTimeout as pause } from 'node:timers/promises'
import { createServer } from 'node:net'

export const projectRoot = resolve(dirname(fileURLToPath(import.meta.url)), '../..')

export const freePort = (): Promise<number> =>
  new Promise((done, fail) => {
    const server = createServer()
    server.once('error', fail)
    server.listen(0, '127.0.0.1', () => {
      const address = server.address()
      server.close(() => (typeof address === 'object' && address ? done(address.port) : fail(new Error('no port'))))
    })
  })

export interface BuiltServer {
  baseUrl: string
  port: number
  process: ChildProcess
  /** Everything the process wrote so far. */
  output: () => string
  /** Ends the process and answers its exit code; null when a signal ended it. */
  stop: (signal?: NodeJS.Signals) => Promise<number | null>
}

const isReady = async (baseUrl: string): Promise<boolean> => {
  try {
    return (await fetch(`${baseUrl}/api/health/ready`, { signal: AbortSignal.timeout(2000) })).ok
  } catch {
    return false
  }
}

/** Runs the built application (`.output`) as its own process and waits until it is ready. */
export const startServer = async (options: {
  env: Record<string, string>
  port?: number
  /** Called with everything the process writes, as it comes. */
  onOutput?: (text: string) => void
}): Promise<BuiltServer> => {
  const port = options.port ?? (await freePort())
  const baseUrl = `http://127.0.0.1:${port}`
  const child = spawn(process.execPath, [join(projectRoot, '.output/server/index.mjs')], {
    cwd: projectRoot,
    stdio: ['ignore', 'pipe', 'pipe'],
    env: {
      PATH: process.env.PATH,
      NODE_ENV: 'production',
      HOST: '127.0.0.1',
      PORT: String(port),
      NUXT_BASE_URL: baseUrl,
      NUXT_SESSION_PASSWORD: randomBytes(32).toString('base64url'),
      ...options.env,
    },
  })
  const parts: Buffer[] = []
  const keep = (part: Buffer) => {
    parts.push(part)
    options.onOutput?.(part.toString('utf8'))
  }
  child.stdout.on('data', keep)
  child.stderr.on('data', keep)
  const output = () => Buffer.concat(parts).toString('utf8')
  const ended = new Promise<number | null>((done) => child.once('exit', (code) => done(code)))
  const stop = async (signal: NodeJS.Signals = 'SIGTERM') => {
    if (child.exitCode !== null || child.signalCode !== null) return child.exitCode
    child.kill(signal)
    const late = setTimeout(() => child.kill('SIGKILL'), 15_000)
    const code = await ended
    clearTimeout(late)
    return code
  }
  const deadline = performance.now() + 60_000
  while (!(await isReady(baseUrl))) {
    if (child.exitCode !== null || performance.now() > deadline) {
      await stop('SIGKILL')
      throw new Error(`the built server did not become ready at ${baseUrl}:\n${output().slice(-4000)}`)
    }
    await pause(50)
  }
  return { baseUrl, port, process: child, output, stop }
}

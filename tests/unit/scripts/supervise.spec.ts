import { spawn } from 'node:child_process'
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join, resolve } from 'node:path'
import { pathToFileURL } from 'node:url'
import { afterAll, describe, expect, it } from 'vitest'

const module = pathToFileURL(resolve('scripts/steps/supervise.mjs')).href
const folder = mkdtempSync(join(tmpdir(), 'supervise-'))
afterAll(() => rmSync(folder, { recursive: true, force: true }))

/** A supervisor in a process of its own, over a program that notes each of its starts and then does what it is told. */
const supervised = (name: string, program: string) => {
  const notes = join(folder, `${name}.starts`)
  const script = join(folder, `${name}.mjs`)
  writeFileSync(notes, '')
  writeFileSync(
    script,
    `import { appendFileSync, readFileSync } from 'node:fs'
     appendFileSync(${JSON.stringify(notes)}, 'x')
     const start = readFileSync(${JSON.stringify(notes)}, 'utf8').length
     ${program}`,
  )
  const child = spawn(process.execPath, [
    '--input-type=module',
    '-e',
    `import { supervise } from ${JSON.stringify(module)}
     process.exitCode = await supervise({ name: 'program', args: [${JSON.stringify(script)}], env: {} })`,
  ])
  let text = ''
  child.stderr.on('data', (part: Buffer) => (text += part.toString()))
  const ended = new Promise<number | null>((done) => child.once('exit', done))
  const starts = () => readFileSync(notes, 'utf8').length
  const untilStart = async (count: number) => {
    while (starts() < count) await new Promise((done) => setTimeout(done, 20))
  }
  return { child, ended, starts, untilStart, output: () => text }
}

const stay = 'setInterval(() => undefined, 1000)'

describe('a supervised program', () => {
  it('is started again when it crashes', async () => {
    const { child, ended, starts, untilStart, output } = supervised('crash', `if (start < 3) process.exit(1)\n${stay}`)
    await untilStart(3)
    await new Promise((done) => setTimeout(done, 300))
    child.kill('SIGTERM')
    expect(await ended).toBe(0)
    expect(starts()).toBe(3)
    expect(output()).toMatch(/ended with code 1; starting it again/)
  })

  it('is given up when it crashes five times within a minute', async () => {
    const { ended, starts, output } = supervised('loop', 'process.exit(7)')
    expect(await ended).toBe(1)
    expect(starts()).toBe(5)
    expect(output()).toMatch(/five times within a minute \(last: code 7\); giving up/)
  })

  it('is not started again when it ends by itself', async () => {
    const { ended, starts } = supervised('done', 'process.exit(0)')
    expect(await ended).toBe(0)
    expect(starts()).toBe(1)
  })

  it.each(['SIGTERM', 'SIGINT'] as const)('ends in its own order on %s', async (signal) => {
    const program = `process.on('SIGTERM', () => setTimeout(() => process.exit(0), 200))\n${stay}`
    const { child, ended, starts, untilStart } = supervised(`order-${signal}`, program)
    await untilStart(1)
    await new Promise((done) => setTimeout(done, 200))
    child.kill(signal)
    expect(await ended).toBe(0)
    expect(starts()).toBe(1)
  })
})

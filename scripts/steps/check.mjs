import { spawn } from 'node:child_process'
import { mkdirSync, readFileSync, rmSync } from 'node:fs'
import { availableParallelism } from 'node:os'
import { inCache, projectRoot } from './paths.mjs'
import { installed } from './run.mjs'

/** Runs a program, lets its output through when it fails (or always, when `show`), answers its exit code. */
const runQuietly = (command, args, { show = false, env = {} } = {}) =>
  new Promise((resolve) => {
    const child = spawn(command, args, {
      cwd: projectRoot,
      env: { ...process.env, ...env },
      stdio: ['ignore', show ? 'inherit' : 'pipe', show ? 'inherit' : 'pipe'],
    })
    const output = []
    child.stdout?.on('data', (part) => output.push(part))
    child.stderr?.on('data', (part) => output.push(part))
    child.once('error', (error) => {
      console.error(error.message)
      resolve(1)
    })
    child.once('close', (code) => {
      if (code !== 0 && !show) process.stdout.write(Buffer.concat(output))
      resolve(code ?? 1)
    })
  })

const seconds = (since) => `${((performance.now() - since) / 1000).toFixed(1)} s`

const staticChecks = [
  { name: 'lint', command: installed('eslint'), args: ['.', '--max-warnings', '0'] },
  { name: 'format', command: installed('prettier'), args: ['--check', '--log-level', 'warn', '.'] },
  { name: 'types', command: installed('vue-tsc'), args: ['-b', '--noEmit'] },
]

/** Lint, format and types, each counted as one check; as many at a time as there are cores. */
export const runStaticChecks = async () => {
  // The types of components and auto-imports are written by this; stale ones would let errors through.
  if ((await runQuietly(installed('nuxt'), ['prepare'])) !== 0)
    return { passed: 0, failed: staticChecks.length, skipped: 0 }
  const waiting = [...staticChecks]
  const outcomes = []
  const work = async () => {
    for (let check = waiting.shift(); check; check = waiting.shift()) {
      const since = performance.now()
      const code = await runQuietly(check.command, check.args)
      console.log(`${code === 0 ? 'passed' : 'FAILED'}  ${check.name} (${seconds(since)})`)
      outcomes.push(code === 0)
    }
  }
  await Promise.all(Array.from({ length: Math.min(2, availableParallelism()) }, work))
  const passed = outcomes.filter(Boolean).length
  return { passed, failed: outcomes.length - passed, skipped: 0 }
}

/**
 * Runs vitest projects and counts their tests. A run that dies (or leaves errors outside any test) counts as a failure
 * even when every finished test passed.
 * @param {string[]} projects
 * @param {string[]} filters words of file names
 */
export const runVitest = async (projects, filters, env = {}) => {
  const report = inCache(`report-${projects.join('-')}.json`)
  mkdirSync(inCache(), { recursive: true })
  rmSync(report, { force: true })
  const code = await runQuietly(
    installed('vitest'),
    [
      'run',
      ...projects.flatMap((name) => ['--project', name]),
      ...['--reporter=default', '--reporter=json', `--outputFile.json=${report}`],
      ...(filters.length > 0 ? ['--passWithNoTests', ...filters] : []),
    ],
    { show: true, env },
  )
  const counts = { passed: 0, failed: 0, skipped: 0 }
  try {
    const found = JSON.parse(readFileSync(report, 'utf8'))
    counts.passed = found.numPassedTests
    counts.failed = found.numFailedTests
    counts.skipped = found.numPendingTests + (found.numTodoTests ?? 0)
    // A file that cannot be loaded has no tests to count.
    counts.failed += found.testResults.filter(
      (file) => file.status === 'failed' && file.assertionResults.length === 0,
    ).length
  } catch {
    counts.failed += 1
  }
  if (code !== 0 && counts.failed === 0) counts.failed = 1
  return counts
}

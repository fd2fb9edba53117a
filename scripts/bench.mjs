import { execFileSync } from 'node:child_process'
import { existsSync, mkdtempSync, readFileSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { dirname, join } from 'node:path'
import { fileURLToPath, pathToFileURL } from 'node:url'
import { parseArgs } from 'node:util'
import { build } from 'esbuild'
import { ensureKernel } from './build-kernel.mjs'

/**
 * npm run bench [-- --rounds 5] [-- --json]
 *
 * Times the engine's hot jobs beside the yardstick script (numpy, one thread), interleaved round by round, and prints medians
 * and ratios of one and the same run. Times are processor time of the process, its compiler and collector threads included:
 * on a busy machine wall time says more about the neighbours. Before that it checks that both give equal numbers. Without
 * numpy and scipy the engine is timed alone.
 */
const root = join(dirname(fileURLToPath(import.meta.url)), '..')
const script = join(root, 'tests/bench/numpy_baseline.py')
const WARM_UP = 5
const ROUND_MS = 200
const LARGEST_DIFFERENCE = 1e-9

const { values: options } = parseArgs({
  options: { rounds: { type: 'string', default: '3' }, json: { type: 'boolean' } },
})
const rounds = Number(options.rounds)
if (!Number.isInteger(rounds) || rounds < 1) {
  console.error(`--rounds: expected a whole number from 1 up; found ${options.rounds}`)
  process.exit(2)
}

/** Debian's own interpreter first: other builds of numpy are slower in sin and cos and would flatter the engine. */
const findPython = () => {
  for (const candidate of ['/usr/bin/python3', 'python3']) {
    try {
      const versions = execFileSync(
        candidate,
        ['-c', 'import numpy, scipy; print("numpy", numpy.__version__, "scipy", scipy.__version__)'],
        { encoding: 'utf8', stdio: ['ignore', 'pipe', 'ignore'] },
      )
      return { command: candidate, versions: versions.trim() }
    } catch {
      continue
    }
  }
  return undefined
}

const median = (values) => {
  const sorted = [...values].sort((a, b) => a - b)
  const middle = sorted.length >> 1
  return sorted.length % 2 === 1 ? sorted[middle] : (sorted[middle - 1] + sorted[middle]) / 2
}

/** float64 numbers of a .npy file (format 1.0, C order). */
const readNpy = (path) => {
  const bytes = readFileSync(path)
  const start = 10 + bytes.readUInt16LE(8)
  const header = bytes.subarray(10, start).toString('latin1')
  if (!header.includes("'<f8'") || header.includes("'fortran_order': True")) {
    throw new Error(`${path}: expected float64 in C order; found ${header}`)
  }
  return new Float64Array(bytes.buffer.slice(bytes.byteOffset + start, bytes.byteOffset + bytes.length))
}

const largestDifference = (found, expected) => {
  if (found.length !== expected.length) return Infinity
  let worst = 0
  let scale = 0
  for (let i = 0; i < found.length; i++) {
    const difference = Math.abs(found[i] - expected[i])
    if (!(difference <= worst)) worst = difference
    scale = Math.max(scale, Math.abs(expected[i]))
  }
  return worst / scale
}

/** Processor time of one call, ms, averaged over as many calls as fill a round. */
const cpuMs = (run) => {
  const start = process.cpuUsage()
  let calls = 0
  let spent = 0
  do {
    run()
    calls++
    const { user, system } = process.cpuUsage(start)
    spent = (user + system) / 1000
  } while (spent < ROUND_MS || calls < 3)
  return spent / calls
}

const yardstick = (python, names, extra) => {
  const out = execFileSync(
    python.command,
    [script, '--jobs', names.join(','), '--rounds', '1', '--clock', 'cpu', ...extra],
    {
      encoding: 'utf8',
      stdio: ['ignore', 'pipe', 'ignore'],
      maxBuffer: 2 ** 26,
    },
  )
  return out
    .trim()
    .split('\n')
    .map((line) => JSON.parse(line))
}

await ensureKernel()
const folder = mkdtempSync(join(tmpdir(), 'linewright-bench-'))
try {
  const bundle = join(folder, 'engine-jobs.mjs')
  await build({
    entryPoints: [join(root, 'tests/bench/engine-jobs.ts')],
    outfile: bundle,
    bundle: true,
    platform: 'node',
    format: 'esm',
    target: 'node20',
    logLevel: 'warning',
  })
  const { jobs } = await import(pathToFileURL(bundle).href)
  const python = existsSync(script) ? findPython() : undefined
  const compared = jobs.filter((job) => job.yardstick)
  const names = compared.map((job) => job.yardstick.job)
  const differences = new Map()
  if (python) {
    yardstick(python, names, ['--dump', folder])
    for (const job of compared) {
      const found = job.run()
      const worst = job.yardstick.arrays.map((array, k) =>
        largestDifference(found[k], readNpy(join(folder, `${job.yardstick.job}.${array}.npy`))),
      )
      differences.set(job.name, Math.max(...worst))
    }
  }

  const engine = new Map(jobs.map((job) => [job.name, []]))
  const plain = new Map(names.map((name) => [name, []]))
  const best = new Map(names.map((name) => [name, []]))
  for (const job of jobs) for (let call = 0; call < WARM_UP; call++) job.run()
  for (let round = 0; round < rounds; round++) {
    if (python) {
      for (const line of yardstick(python, names, []))
        (line.kind === 'plain' ? plain : best).get(line.job).push(line.medianMs)
    }
    for (const job of jobs) engine.get(job.name).push(cpuMs(job.run))
  }

  const rows = jobs.map((job) => {
    const own = median(engine.get(job.name))
    const other = job.yardstick && python ? median(plain.get(job.yardstick.job)) : undefined
    const fastest = job.yardstick && python ? best.get(job.yardstick.job) : []
    return {
      job: job.name,
      engineMs: own,
      minMs: Math.min(...engine.get(job.name)),
      maxMs: Math.max(...engine.get(job.name)),
      ...(other === undefined ? {} : { plainMs: other, timesFasterThanPlain: other / own }),
      ...(fastest.length > 0 ? { bestMs: median(fastest), timesFasterThanBest: median(fastest) / own } : {}),
      ...(differences.has(job.name) ? { largestDifference: differences.get(job.name) } : {}),
    }
  })
  if (options.json)
    console.log(JSON.stringify({ node: process.version, yardstick: python?.versions ?? null, rounds, rows }, null, 2))
  else {
    console.log(`Node ${process.version}, ${rounds} interleaved rounds, medians of processor time in ms`)
    console.log(
      python
        ? `Yardstick: ${python.versions} (${python.command})`
        : 'Yardstick skipped: no python3 with numpy and scipy here',
    )
    const number = (value, digits = 3) => (value === undefined ? '-' : Number(value.toPrecision(digits)).toString())
    console.table(
      Object.fromEntries(
        rows.map((row) => [
          row.job,
          {
            engine: number(row.engineMs),
            range: `${number(row.minMs)} to ${number(row.maxMs)}`,
            plain: number(row.plainMs),
            'x plain': number(row.timesFasterThanPlain),
            best: number(row.bestMs),
            'x best': number(row.timesFasterThanBest),
            difference: number(row.largestDifference, 2),
          },
        ]),
      ),
    )
  }
  const wrong = rows.filter(
    (row) => row.largestDifference !== undefined && !(row.largestDifference < LARGEST_DIFFERENCE),
  )
  for (const row of wrong) {
    console.error(
      `${row.job}: expected numbers equal to ${LARGEST_DIFFERENCE}; found a difference of ${row.largestDifference}`,
    )
  }
  process.exitCode = wrong.length > 0 ? 1 : 0
} finally {
  rmSync(folder, { recursive: true, force: true })
}

/**
 * The engine's command line: no database, no server. Bundled by scripts/build-engine.mjs, run by scripts/engine.mjs.
 * Answers go to standard output as JSON, everything else to standard error. Exit status 2 for wrong input, 1 for a fault of
 * the engine itself.
 */
import { readFileSync } from 'node:fs'
import { ENGINE_VERSION } from '../../shared/engine/engine-version'
import { evaluateRequests, parseRequests } from '../../shared/evaluate/evaluate'
import { InputProblem } from './input-problem'
import { sphereCommand } from './modes'

const usage = `Linewright engine ${ENGINE_VERSION}

  evaluate FILE.json   answer an array of requests (- reads standard input)
  modes                vibrations of an elastic sphere:
      --radius-nm R --longitudinal M_PER_S --transverse M_PER_S [--density KG_PER_M3]
      [--shell-nm T --shell DENSITY,LONGITUDINAL,TRANSVERSE] [--matrix DENSITY,LONGITUDINAL,TRANSVERSE]
      [--count N] [--highest-l L]
`

const readDocument = (file: string | undefined): unknown => {
  if (!file)
    throw new InputProblem([{ path: 'FILE', message: 'expected the path of a JSON file, or -; found nothing' }])
  let text: string
  try {
    text = readFileSync(file === '-' ? 0 : file, 'utf8')
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error)
    throw new InputProblem([{ path: file, message: `expected a file that can be read; ${reason}` }])
  }
  try {
    return JSON.parse(text)
  } catch (error) {
    const reason = error instanceof Error ? error.message : String(error)
    throw new InputProblem([{ path: '$', message: `expected JSON; ${reason}` }])
  }
}

const evaluateCommand = (args: readonly string[]): unknown => {
  if (args.length > 1) {
    throw new InputProblem([{ path: 'FILE', message: `expected one file; found ${args.length} arguments` }])
  }
  const { requests, problems } = parseRequests(readDocument(args[0]))
  if (problems.length > 0) throw new InputProblem(problems)
  return evaluateRequests(requests)
}

const main = (): number => {
  const [command, ...args] = process.argv.slice(2)
  try {
    if (command === 'evaluate') process.stdout.write(`${JSON.stringify(evaluateCommand(args))}\n`)
    else if (command === 'modes') process.stdout.write(`${JSON.stringify(sphereCommand(args), null, 1)}\n`)
    else if (command === undefined || command === 'help' || command === '--help') process.stdout.write(usage)
    else {
      throw new InputProblem([{ path: 'command', message: `expected evaluate or modes; found "${command}"` }])
    }
    return 0
  } catch (error) {
    if (error instanceof InputProblem) {
      for (const { path, message } of error.problems) process.stderr.write(`${path}: ${message}\n`)
      return 2
    }
    process.stderr.write(
      `The engine failed: ${error instanceof Error ? (error.stack ?? error.message) : String(error)}\n`,
    )
    return 1
  }
}

process.exitCode = main()

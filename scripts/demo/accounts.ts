import { randomBytes, scrypt } from 'node:crypto'
import { mkdir, readFile, rename, writeFile } from 'node:fs/promises'
import { dirname } from 'node:path'
import { promisify } from 'node:util'

/** What is kept of the demo between two starts. The file is readable for its owner only. */
export interface DemoRecord {
  passwords: Record<string, string>
  /** Group that was filled to the end. */
  filledGroupId?: string
}

const derive = promisify<string, Buffer, number, { N: number; r: number; p: number; maxmem: number }, Buffer>(scrypt)

/** Cost of the application's own hashes (nuxt.config.ts, auth.hash): another one would be replaced at the first sign-in. */
const cost = { N: 131_072, r: 8, p: 1 } as const
const saltBytes = 16
const keyBytes = 64

const base64 = (bytes: Buffer) => bytes.toString('base64').replace(/=+$/, '')

/** A password hash as the application stores it: scrypt in the PHC string format. */
export const hashDemoPassword = async (password: string): Promise<string> => {
  const salt = randomBytes(saltBytes)
  const key = await derive(password, salt, keyBytes, { ...cost, maxmem: 160 * 1024 * 1024 })
  return `$scrypt$n=${cost.N},r=${cost.r},p=${cost.p}$${base64(salt)}$${base64(key)}`
}

export const newDemoPassword = (): string => randomBytes(18).toString('base64url')

export const readDemoRecord = async (path: string): Promise<DemoRecord> => {
  try {
    return JSON.parse(await readFile(path, 'utf8')) as DemoRecord
  } catch (error) {
    if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return { passwords: {} }
    throw new Error(`${path}: expected the record of the demo accounts; ${String(error)}`)
  }
}

export const writeDemoRecord = async (path: string, record: DemoRecord): Promise<void> => {
  await mkdir(dirname(path), { recursive: true, mode: 0o700 })
  await writeFile(`${path}.new`, `${JSON.stringify(record, null, 2)}\n`, { mode: 0o600 })
  await rename(`${path}.new`, path)
}

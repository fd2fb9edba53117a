import { Readable } from 'node:stream'
import { getDatabase } from '../../server/database/client'
import { createGroup, createMembership, listGroupsOfUser } from '../../server/database/repositories/groups.repository'
import { createUser, findUserByEmail, updatePasswordHash } from '../../server/database/repositories/users.repository'
import { addFile, keepBytes } from '../../server/services/files.service'
import { addMeasurement, listGroupMeasurements } from '../../server/services/measurements.service'
import {
  createParameterSet,
  getParameterSet,
  listParameterSets,
  saveParameterSet,
} from '../../server/services/parameter-sets.service'
import { createRun, listRuns } from '../../server/services/runs.service'
import { ParameterSetSchema } from '../../shared/schemas/parameter-set'
import { hashDemoPassword } from './accounts'
import { demoGroupName, demoPeople, demoSets, type DemoSet } from './scenario'
import { makeDemoSpectra, type DemoSpectrum } from './spectra'

/** Id of the account; the password becomes the given one when it is new. */
export const ensureAccount = async (
  { email, name }: { email: string; name: string },
  password: string,
  isNewPassword: boolean,
): Promise<string> => {
  const found = await findUserByEmail(getDatabase(), email)
  if (found !== null && !isNewPassword) return found.id
  const passwordHash = await hashDemoPassword(password)
  if (found !== null) {
    await updatePasswordHash(getDatabase(), found.id, passwordHash)
    return found.id
  }
  const made = await createUser(getDatabase(), { email, name, passwordHash, isDemo: true })
  const userId = made ?? (await findUserByEmail(getDatabase(), email))?.id
  if (userId === undefined) throw new Error(`expected the demo account ${email}; it is disabled`)
  return userId
}

/** Id of the demo group, made with its three members when it is not there. */
export const ensureGroup = async (userIds: ReadonlyMap<string, string>): Promise<string> => {
  const idOf = (email: string) => {
    const id = userIds.get(email)
    if (id === undefined) throw new Error(`expected an account for ${email}`)
    return id
  }
  const owner = demoPeople.find(({ role }) => role === 'owner')
  if (owner === undefined) throw new Error('expected an owner among the demo accounts')
  const ownerId = idOf(owner.email)
  const found = (await listGroupsOfUser(getDatabase(), ownerId)).find(({ isDemo }) => isDemo)
  const groupId =
    found?.id ?? (await createGroup(getDatabase(), { name: demoGroupName, createdBy: ownerId, isDemo: true })).id
  for (const { email, role } of demoPeople) {
    const userId = idOf(email)
    const isMember = (await listGroupsOfUser(getDatabase(), userId)).some(({ id }) => id === groupId)
    if (!isMember) await createMembership(getDatabase(), { groupId, userId, role })
  }
  return groupId
}

const fillSet = async (groupId: string, userId: string, { name, versions }: DemoSet): Promise<string> => {
  const existing = (await listParameterSets(groupId)).find((set) => set.name === name)
  const [first, ...later] = versions.map(({ note, parameters }) => ({
    note,
    parameters: ParameterSetSchema.parse(parameters),
  }))
  if (first === undefined) throw new Error(`${name}: expected at least one version`)
  const setId = existing?.id ?? (await createParameterSet(groupId, userId, { name, ...first })).id
  for (const [index, version] of later.entries()) {
    const { latestVersion } = await getParameterSet(groupId, setId)
    if (latestVersion === index + 1)
      await saveParameterSet(groupId, userId, setId, { ...version, basedOn: latestVersion })
  }
  return setId
}

const fillMeasurement = async (groupId: string, userId: string, spectrum: DemoSpectrum): Promise<void> => {
  const kept = await keepBytes(Readable.from([spectrum.content]))
  const { file, proposal } = await addFile(groupId, userId, spectrum.fileName, kept)
  const [open] = proposal.needsAnswer
  if (open !== undefined) throw new Error(`${spectrum.fileName}: expected a file without questions; ${open.message}`)
  const { name, kind, sampleName, temperatureK, note } = spectrum
  const request = { fileId: file.id, name, kind, sampleName, temperatureK, note, reading: proposal.reading }
  await addMeasurement(groupId, userId, request, { isInvented: true })
}

/** Sets, measurements and runs of the demo; what is there already stays as it is. */
export const fillGroup = async (groupId: string, userId: string): Promise<void> => {
  const measured = new Set((await listGroupMeasurements(groupId)).map(({ name }) => name))
  for (const spectrum of makeDemoSpectra())
    if (!measured.has(spectrum.name)) await fillMeasurement(groupId, userId, spectrum)
  for (const set of demoSets) {
    const setId = await fillSet(groupId, userId, set)
    if ((await listRuns(groupId, { setId })).length === 0)
      await createRun({ groupId, userId, setId, version: set.versions.length })
  }
}

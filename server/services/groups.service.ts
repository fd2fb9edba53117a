import { AppError } from '../../shared/errors/app-error'
import type { GroupRequest } from '../../shared/schemas/group'
import { getDatabase } from '../database/client'
import {
  countObjects,
  createGroup,
  createMembership,
  findGroupOfUser,
  listGroupsOfUser,
  listMembers,
  type GroupOfUser,
} from '../database/repositories/groups.repository'
import { withTransaction } from '../database/transaction'
import { withGroup } from '../database/with-group'
import { logger } from '../utils/logger'

const groupsPerUser = 200

export const listOwnGroups = (userId: string): Promise<GroupOfUser[]> => listGroupsOfUser(getDatabase(), userId)

/** Whoever makes a group owns it. */
export const openGroup = async (request: GroupRequest, userId: string): Promise<GroupOfUser> => {
  if ((await listGroupsOfUser(getDatabase(), userId)).length >= groupsPerUser) {
    throw new AppError('quota/exceeded', { detail: `One account may belong to at most ${groupsPerUser} groups.` })
  }
  const group = await withTransaction(async (transaction) => {
    const created = await createGroup(transaction, { name: request.name, createdBy: userId })
    await createMembership(transaction, { groupId: created.id, userId, role: 'owner' })
    return created
  })
  logger.info({ event: 'group.created', groupId: group.id, userId })
  return { id: group.id, name: group.name, role: 'owner', isDemo: group.isDemo }
}

export const getGroupDetail = async (groupId: string, userId: string) => {
  const group = await findGroupOfUser(getDatabase(), groupId, userId)
  if (!group) throw new AppError('request/not-found')
  const members = await listMembers(getDatabase(), groupId)
  const counts = await withGroup(groupId, (tx) => countObjects(tx, groupId))
  return { ...group, members, counts }
}

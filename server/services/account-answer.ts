import type { GroupOfUser } from '../database/repositories/groups.repository'

export const toPerson = (person: { id: string; name: string }) => ({ id: person.id, name: person.name })

export const toUser = (user: { id: string; email: string; name: string }) => ({
  id: user.id,
  email: user.email,
  name: user.name,
})

export const toGroup = (group: GroupOfUser) => ({
  id: group.id,
  name: group.name,
  role: group.role,
  isDemo: group.isDemo,
})

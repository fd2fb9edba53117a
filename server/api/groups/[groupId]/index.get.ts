import { toGroup, toPerson } from '../../../services/account-answer'
import { getGroupDetail } from '../../../services/groups.service'
import { defineGroupRoute } from '../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  handler: async ({ groupId, user }) => {
    const group = await getGroupDetail(groupId, user.id)
    return {
      ...toGroup(group),
      members: group.members.map((member) => ({ ...toPerson(member), role: member.role })),
      counts: group.counts,
    }
  },
})

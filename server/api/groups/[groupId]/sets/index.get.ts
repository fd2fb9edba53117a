import { listParameterSets } from '../../../../services/parameter-sets.service'
import { toSetListItem } from '../../../../services/set-answer'
import { defineGroupRoute } from '../../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  handler: async ({ groupId }) => ({ sets: (await listParameterSets(groupId)).map(toSetListItem) }),
})

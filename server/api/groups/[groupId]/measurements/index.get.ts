import { toMeasurementItem } from '../../../../services/measurement-answer'
import { listGroupMeasurements } from '../../../../services/measurements.service'
import { defineGroupRoute } from '../../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  handler: async ({ groupId }) => ({ measurements: (await listGroupMeasurements(groupId)).map(toMeasurementItem) }),
})

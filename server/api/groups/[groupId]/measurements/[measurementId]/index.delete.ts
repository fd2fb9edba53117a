import { z } from 'zod'
import { removeGroupMeasurement } from '../../../../../services/measurements.service'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  params: z.strictObject({ measurementId: z.uuid() }),
  handler: ({ groupId, params }) => removeGroupMeasurement(groupId, params.measurementId),
})

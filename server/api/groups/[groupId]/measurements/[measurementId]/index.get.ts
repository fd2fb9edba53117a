import { z } from 'zod'
import { toMeasurement } from '../../../../../services/measurement-answer'
import { getMeasurement } from '../../../../../services/measurements.service'
import { defineGroupRoute } from '../../../../../utils/define-route'

export default defineGroupRoute({
  access: 'viewer',
  params: z.strictObject({ measurementId: z.uuid() }),
  handler: async ({ groupId, params }) => toMeasurement(await getMeasurement(groupId, params.measurementId)),
})

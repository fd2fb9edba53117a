import { MeasurementRequestSchema } from '../../../../../shared/schemas/measurement'
import { toMeasurement } from '../../../../services/measurement-answer'
import { addMeasurement } from '../../../../services/measurements.service'
import { defineGroupRoute } from '../../../../utils/define-route'

export default defineGroupRoute({
  access: 'editor',
  body: MeasurementRequestSchema,
  status: 201,
  handler: async ({ groupId, user, body }) => toMeasurement(await addMeasurement(groupId, user.id, body)),
})
